import { execFileSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { composeStudy, type StudyBasis } from '../../../server/services/studies.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { computeStudy } from '../../../workers/compute-study.ts';
import { makeTestDatabase, type TestDatabase } from '../../support/database.ts';
import { makeFixtureModel } from '../../support/fixture-feeder.ts';
import {
  insertFixtureApplication,
  machineProject,
  type FixtureApplication,
} from '../../support/fixture-runs.ts';
import { makeFixtureWorld, type FixtureWorld } from '../../support/fixture-world.ts';
import { getTestServices } from '../../support/services.ts';

let test: TestDatabase;
let world: FixtureWorld;
let first: FixtureApplication;
let second: FixtureApplication;
let own: FixtureApplication;

beforeAll(async () => {
  test = await makeTestDatabase();
  world = await makeFixtureWorld(test.db);
  const project = {
    ...machineProject(1000),
    lines: [
      {
        id: 'tap',
        from: 'n2',
        to: 'yard',
        phases: 'ABC',
        km: 0.1,
        z1: { r: 0.2, x: 0.4 },
        z0: { r: 0.4, x: 1 },
      },
    ],
    nodes: [
      { id: 'site', kv: 4.16, phases: 'ABC', with: 'machine' },
      { id: 'yard', kv: 12.47, phases: 'ABC' },
    ],
    devices: [{ id: 'own-fuse', branch: 'tap', end: 'from' as const, kind: 'fuse' }],
  };
  first = await insertFixtureApplication(test.db, world, { project });
  second = await insertFixtureApplication(test.db, world, { project: machineProject(500) });
  own = await insertFixtureApplication(test.db, world, { project: machineProject(2500) });
});
afterAll(() => test.drop());

function makeBasis(ahead: FixtureApplication[]): StudyBasis {
  return {
    modelVersionId: world.model.versionId,
    aheadRevisionIds: ahead.map((application) => application.revisionId),
    ownRevisionId: own.revisionId,
    ruleSetVersionId: world.ruleSetVersionId,
  };
}

async function compose(ahead: FixtureApplication[]): Promise<Study> {
  return JSON.parse((await composeStudy(test.db, makeBasis(ahead))).bytes.toString()) as Study;
}

describe('composeStudy', () => {
  it('is the model as published and the project as handed in, when nobody is ahead', async () => {
    const study = await compose([]);
    const { feeder, ...rest } = makeFixtureModel();
    expect(study).toMatchObject({ format: 'feederwright.study/1', ...rest, project: machineProject(2500) });
    expect(study.feeder).toEqual(feeder);
  });

  it('adds what is ahead under its own mark, and leaves places on the feeder their names', async () => {
    const { feeder } = await compose([first]);
    const mark = `q-${first.number}/`;
    expect(feeder.machines).toMatchObject([{ id: `${mark}machine`, node: `${mark}site`, kva: 1000 }]);
    expect(feeder.transformers).toMatchObject([{ id: `${mark}step-up`, from: 'n2', to: `${mark}site` }]);
    expect(feeder.nodes).toContainEqual(
      expect.objectContaining({ id: `${mark}site`, with: `${mark}machine` }),
    );
    expect(feeder.lines?.at(-1)).toMatchObject({ id: `${mark}tap`, from: 'n2', to: `${mark}yard` });
    expect(feeder.devices?.at(-1)).toMatchObject({ id: `${mark}own-fuse`, branch: `${mark}tap` });
    expect(feeder.lines).toHaveLength(6);
  });

  it('marks what refers to the own elements alone: no service of the feeder, no node that has a name of another kind', async () => {
    const project = {
      ...machineProject(200),
      capacitors: [{ id: 'n2', node: 'site', phases: 'ABC', kvar: 50, with: 'machine' }],
      inverters: [
        {
          ...{ id: 'roof', node: 'n2', phases: 'ABC', kva: 5, faultCurrentPu: 1.2 },
          service: { transformer: 'roof' },
        },
      ],
    };
    project.transformers![0]!.unitMachine = 'machine';
    const ahead = await insertFixtureApplication(test.db, world, { project });
    const { feeder } = await compose([ahead]);
    const mark = `q-${ahead.number}/`;
    expect(feeder.capacitors).toEqual([
      { ...project.capacitors[0], id: `${mark}n2`, node: `${mark}site`, with: `${mark}machine` },
    ]);
    expect(feeder.inverters).toMatchObject([
      { id: `${mark}roof`, node: 'n2', service: { transformer: 'roof' } },
    ]);
    expect(feeder.transformers?.at(-1)).toMatchObject({ unitMachine: `${mark}machine` });
  });

  it('keeps the order of the queue, and takes two projects whose elements have the same ids', async () => {
    const { feeder } = await compose([second, first]);
    const ids = feeder.machines?.map((machine) => machine.id);
    expect(ids).toEqual([`q-${second.number}/machine`, `q-${first.number}/machine`]);
    const { bytes, ruleSet } = await composeStudy(test.db, makeBasis([second, first]));
    expect(computeStudy(bytes, ruleSet).kind).toBe('computed');
  });

  it('gives the same bytes for the same basis', async () => {
    const [one, two] = [
      await composeStudy(test.db, makeBasis([first])),
      await composeStudy(test.db, makeBasis([first])),
    ];
    expect(one.bytes.equals(two.bytes)).toBe(true);
  });

  it('adds to the fault current: one project ahead gives more before the own project than none', async () => {
    const threePhase = async (ahead: FixtureApplication[]) => {
      const { bytes, ruleSet } = await composeStudy(test.db, makeBasis(ahead));
      const answer = computeStudy(bytes, ruleSet);
      if (answer.kind !== 'computed') throw new Error(answer.problems.join('\n'));
      return answer.summary?.poi.before.threePhase as number;
    };
    expect(await threePhase([first])).toBeGreaterThan(await threePhase([]));
  });
});

it('the command line prints exactly the bytes that a run stores', async () => {
  const { bytes, ruleSet } = await composeStudy(test.db, makeBasis([first]));
  const file = join(getTestServices().directory, 'composed-study.json');
  writeFileSync(file, bytes);
  const printed = execFileSync(process.execPath, ['workers/study.mjs', file], { maxBuffer: 1e9 });
  const answer = computeStudy(bytes, ruleSet);
  if (answer.kind !== 'computed') throw new Error(answer.problems.join('\n'));
  expect(printed.equals(Buffer.from(answer.resultBytes))).toBe(true);
});
