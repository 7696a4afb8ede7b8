import { createHash } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { findApplicationById } from '../../db/repositories/applications.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
import { findRun } from '../../db/repositories/runs.ts';
import { claimRun } from '../../db/repositories/run-turns.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { listAsked } from '../../shared/schemas/rule-sets.ts';
import { ComputeFault } from '../../server/compute.ts';
import { computeStudy } from '../../workers/compute-study.ts';
import { screenRun } from '../../workers/jobs/screen.ts';
import { makeTestDatabase, type TestDatabase } from '../support/database.ts';
import {
  insertFixtureApplication,
  insertFixtureRun,
  machineProject,
  type FixtureApplication,
} from '../support/fixture-runs.ts';
import { makeScreening } from '../support/fixture-screening.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';

let test: TestDatabase;
let world: FixtureWorld;
let application: FixtureApplication;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
});
afterAll(() => test.drop());
beforeEach(async () => {
  application = await insertFixtureApplication(test.db, world, {
    project: machineProject(2000 + Math.random()),
  });
});

async function getRun(publicId: string) {
  const run = await findRun(test.db, publicId);
  if (run === undefined) throw new Error(`no run ${publicId}`);
  return run;
}

const listFindings = (runId: number) => test.db('run_findings').where({ run_id: runId }).orderBy('seq');
const listMail = () => test.db('outbox').where({ application_id: application.id });

describe('screenRun', () => {
  it('stores study, result and findings of a run, and tells application, applicant and listeners', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db);

    await screenRun(deps, id);

    const run = await getRun(publicId);
    expect(run).toMatchObject({ state: 'finished', error: null, errorDetail: null });
    const study = await getBlob(test.db, run.studySha256 as Buffer);
    expect(
      createHash('sha256')
        .update(study)
        .digest()
        .equals(run.studySha256 as Buffer),
    ).toBe(true);
    expect(JSON.parse(study.toString()).project.machines).toHaveLength(1);
    const result = JSON.parse((await getBlob(test.db, run.resultSha256 as Buffer)).toString());
    expect(result.findings.length).toBeGreaterThanOrEqual(listAsked(proFormaRuleSet).length);

    const findings = await listFindings(id);
    expect(findings.map((row) => JSON.parse(row.detail))).toEqual(result.findings);
    expect(findings.map((row) => row.question)).toContain('interrupting-duty');
    expect(run.summary?.poi).toMatchObject({ node: 'n2', kv: 12.47 });
    expect(run.summary?.poi.after.threePhase).toBeGreaterThan(run.summary?.poi.before.threePhase as number);
    expect(run.summary?.devices.map((device) => device.id)).toEqual(['cb1', 'cb2']);

    const outside = findings.filter((row) => row.verdict === 'outside').length;
    const needsData = findings.filter((row) => row.verdict === 'needs-data').length;
    expect(await findApplicationById(test.db, application.id)).toMatchObject({
      runId: id,
      outsideCount: outside,
      needsDataCount: needsData,
    });
    expect(await listMail()).toMatchObject([{ kind: 'screening-done', recipient: 'ada@saltwick.example' }]);
    expect(deps.published.at(-1)).toMatchObject({ kind: 'application', id: application.publicId });
    const versions = deps.published.filter((event) => event.id === publicId).map((event) => event.version);
    expect(versions).toEqual([...versions].sort((a, b) => a - b));
    expect(versions.at(-1)).toBe(run.version);
  });

  it('writes every real step with its percent as it goes, from taken to finished', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db);
    const seen: number[] = [];
    deps.events.publish = async ({ kind }) => {
      if (kind !== 'run') return;
      const { steps } = await getRun(publicId);
      seen.push(steps.at(-1)?.percent ?? 0);
    };

    await screenRun(deps, id);

    expect(new Set(seen).size).toBeGreaterThanOrEqual(6);
    expect(seen).toEqual([...seen].sort((a, b) => a - b));
    const { steps } = await getRun(publicId);
    expect(steps[0]).toMatchObject({ key: 'taken' });
    expect(steps.at(-1)).toMatchObject({ key: 'finished', percent: 100 });
    expect(new Set(steps.map((step) => step.percent)).size).toBe(steps.length);
  });

  it('leaves a run alone that another worker has, and one that is finished', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db);
    const now = new Date();
    const claim = { runId: id, now, leaseUntil: new Date(now.getTime() + 60_000) };
    expect(await claimRun(test.db, { ...claim, token: Buffer.alloc(16, 1) })).toMatchObject({ attempt: 1 });
    expect(await claimRun(test.db, { ...claim, token: Buffer.alloc(16, 2) })).toBeUndefined();

    await screenRun(deps, id);
    expect(deps.computed()).toBe(0);
    expect(await getRun(publicId)).toMatchObject({ state: 'running' });

    await test.db('runs').where({ id }).update({ state: 'queued', token: null });
    await screenRun(deps, id);
    await screenRun(deps, id);
    expect(deps.computed()).toBe(1);
    expect(await getRun(publicId)).toMatchObject({ state: 'finished' });
  });

  it('changes nothing when the turn was lost while it computed', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const other = Buffer.alloc(16, 7);
    const deps = makeScreening(test.db, {
      compute: {
        async study(bytes, ruleSet) {
          await test.db('runs').where({ id }).update({ token: other });
          return computeStudy(bytes, ruleSet);
        },
      },
    });

    await screenRun(deps, id);

    const row = await test.db('runs').where({ id }).first();
    expect(row).toMatchObject({
      state: 'running',
      study_sha256: null,
      result_sha256: null,
      finished_at: null,
    });
    expect(row.token.equals(other)).toBe(true);
    expect(await listFindings(id)).toEqual([]);
    expect(await listMail()).toEqual([]);
    expect(await getRun(publicId)).toMatchObject({ state: 'running' });
  });

  it('changes nothing when the turn is lost in the last moment before the result is stored', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db);
    deps.events.publish = async () => {
      const { steps } = await getRun(publicId);
      if (steps.at(-1)?.key !== 'keeping') return;
      await test
        .db('runs')
        .where({ id })
        .update({ token: Buffer.alloc(16, 7) });
    };

    await screenRun(deps, id);

    expect(await test.db('runs').where({ id }).first()).toMatchObject({
      state: 'running',
      result_sha256: null,
    });
    expect(await listFindings(id)).toEqual([]);
    expect(await listMail()).toEqual([]);
    expect(await findApplicationById(test.db, application.id)).toMatchObject({ outsideCount: null });
  });

  it('uses the numbers of a finished run on an equal basis, and says so', async () => {
    const first = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db);
    await screenRun(deps, first.id);
    const second = await insertFixtureRun(test.db, application);
    expect(second.id).not.toBe(first.id);

    await screenRun(deps, second.id);

    expect(deps.computed()).toBe(1);
    const [one, two] = [await getRun(first.publicId), await getRun(second.publicId)];
    expect(two).toMatchObject({ state: 'finished', summary: one.summary, warnings: one.warnings });
    expect(two.studySha256).toEqual(one.studySha256);
    expect(two.resultSha256).toEqual(one.resultSha256);
    expect(two.steps.map((step) => step.key)).toEqual(['taken', 'reused', 'finished']);
    const details = async (id: number) => (await listFindings(id)).map((row) => row.detail as string);
    expect(await details(second.id)).toEqual(await details(first.id));
  });

  it('takes a study that does not hold together for a result: failed at once, with the element named to staff', async () => {
    const broken = machineProject(1234);
    broken.machines = [{ ...broken.machines![0]!, node: 'nowhere' }];
    const bad = await insertFixtureApplication(test.db, world, { project: broken });
    const { id, publicId } = await insertFixtureRun(test.db, bad);

    await screenRun(makeScreening(test.db), id);

    const run = await getRun(publicId);
    expect(run).toMatchObject({ state: 'failed', studySha256: null });
    expect(run.error).not.toContain('nowhere');
    expect(run.errorDetail).toContain('nowhere');
    expect(await test.db('runs').where({ id }).first()).toMatchObject({ attempt: 1, next_attempt_at: null });
  });

  it('tries a fault again at growing intervals, and parks the run after five attempts', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    let nowMs = Date.now();
    const deps = makeScreening(test.db, {
      now: () => new Date(nowMs),
      retryDelaysSeconds: [5, 20, 60, 180],
      compute: { study: () => Promise.reject(new ComputeFault('The compute process ended')) },
    });

    const waits: number[] = [];
    for (let attempt = 1; attempt <= 4; attempt += 1) {
      await screenRun(deps, id);
      const row = await test.db('runs').where({ id }).first();
      expect(row).toMatchObject({ state: 'queued', attempt, token: null });
      waits.push(Math.round((row.next_attempt_at.getTime() - nowMs) / 1000));
      await screenRun(deps, id); // not due yet
      expect(await test.db('runs').where({ id }).first('attempt')).toEqual({ attempt });
      nowMs = row.next_attempt_at.getTime();
    }
    expect(waits).toEqual([5, 20, 60, 180]);
    await screenRun(deps, id);
    const run = await getRun(publicId);
    expect(run).toMatchObject({ state: 'failed' });
    expect(run.error).toContain('5 attempts');
    expect(run.errorDetail).toContain('The compute process ended');
  });

  it('does not let an earlier run that ends late take the place of a later one', async () => {
    const earlier = await insertFixtureRun(test.db, application);
    await test
      .db('applications')
      .where({ id: application.id })
      .update({ run_id: earlier.id + 1000 });

    await screenRun(makeScreening(test.db), earlier.id);

    expect(await getRun(earlier.publicId)).toMatchObject({ state: 'finished' });
    expect(await findApplicationById(test.db, application.id)).toMatchObject({
      runId: earlier.id + 1000,
      outsideCount: null,
    });
  });

  it('holds its turn while a computation takes longer than the lease', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const deps = makeScreening(test.db, {
      leaseSeconds: 1,
      compute: {
        async study(bytes, ruleSet) {
          await new Promise((resolve) => setTimeout(resolve, 1600));
          const row = await test.db('runs').where({ id }).first('lease_until');
          expect(row.lease_until.getTime()).toBeGreaterThan(Date.now());
          return computeStudy(bytes, ruleSet);
        },
      },
    });

    await screenRun(deps, id);

    expect(await getRun(publicId)).toMatchObject({ state: 'finished' });
  });
});
