import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { inTransaction } from '../../db/connection.ts';
import { insertDecision } from '../../db/repositories/decisions.ts';
import { findRun } from '../../db/repositories/runs.ts';
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

describe('the mail that a screening is done', () => {
  it('tells the applicant once of each kind of run, not again when it is screened again', async () => {
    const deps = makeScreening(test.db);
    const screen = async () => screenRun(deps, (await insertFixtureRun(test.db, application)).id);
    await screen();
    await screen();
    expect(await listMail()).toHaveLength(1);
    const official = await insertFixtureRun(test.db, application);
    await test.db('runs').where({ id: official.id }).update({ kind: 'official' });
    await screenRun(deps, official.id);
    await screen();
    const kinds = (await listMail()).map(
      ({ payload }) => (JSON.parse(payload) as { runKind: string }).runKind,
    );
    expect(kinds).toEqual(['preliminary', 'official']);
  });

  it('tells the applicant nothing of a run that ends after the decision', async () => {
    const deps = makeScreening(test.db);
    const decided = await insertFixtureRun(test.db, application);
    await test.db('runs').where({ id: decided.id }).update({ state: 'finished' });
    await inTransaction(test.db, (trx) =>
      insertDecision(trx, {
        applicationId: application.id,
        runId: decided.id,
        kind: 'require-study',
        reason: 'The feeder is short of room.',
        conditions: null,
        decidedBy: world.people.reviewer.id,
        decidedAt: new Date(),
      }),
    );
    await test.db('runs').where({ id: decided.id }).update({ state: 'queued' });
    await screenRun(deps, decided.id);
    expect(await getRun(decided.publicId)).toMatchObject({ state: 'finished' });
    expect(await listMail()).toEqual([]);
  });
});

describe('a result that cannot be kept', () => {
  it('takes a project of vanishing size for a failed run that names it: never stored, never tried again', async () => {
    const poisoned = machineProject(1e-300);
    poisoned.transformers = [{ ...poisoned.transformers![0]!, kva: 1e-300 }];
    const bad = await insertFixtureApplication(test.db, world, { project: poisoned });
    const { id, publicId } = await insertFixtureRun(test.db, bad);

    await screenRun(makeScreening(test.db), id);

    const run = await getRun(publicId);
    expect(run).toMatchObject({ state: 'failed', resultSha256: null });
    expect(run.errorDetail).toMatch(/^\/project\/transformers\/0\/kva: got 1e-300, expected a number/);
    expect(await listFindings(id)).toEqual([]);
    expect(await test.db('runs').where({ id }).first()).toMatchObject({ attempt: 1, next_attempt_at: null });
  });

  it('fails at once where the database refuses a result, and the next run is not held up', async () => {
    const { id, publicId } = await insertFixtureRun(test.db, application);
    const unkept = makeScreening(test.db, {
      compute: {
        async study(bytes, ruleSet) {
          const answer = computeStudy(bytes, ruleSet);
          if (answer.kind === 'computed') answer.findings[0]!.unit = 'kilo'.repeat(20);
          return answer;
        },
      },
    });

    await screenRun(unkept, id);

    const run = await getRun(publicId);
    expect(run).toMatchObject({ state: 'failed', resultSha256: null });
    expect(run.error).toContain('cannot be stored');
    expect(run.errorDetail).toContain('unit');
    expect(await test.db('runs').where({ id }).first()).toMatchObject({ attempt: 1, next_attempt_at: null });
    const next = await insertFixtureRun(test.db, application);
    await screenRun(makeScreening(test.db), next.id);
    expect(await getRun(next.publicId)).toMatchObject({ state: 'finished' });
  });
});
