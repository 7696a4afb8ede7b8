import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inTransaction } from '../../db/connection.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { insertModelNodes } from '../../db/repositories/model-nodes.ts';
import { insertPublishedVersion } from '../../db/repositories/model-versions.ts';
import type { EquipmentView } from '../../shared/schemas/equipment.ts';
import type {
  AddressView,
  ModelDrawing,
  NetworkModelView,
  SnapView,
} from '../../shared/schemas/territory.ts';
import { listFixtureNodes, makeFixtureModel } from '../support/fixture-feeder.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let world: FixtureWorld;
let applicant: Browser;
let planner: Browser;

beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, world.people.applicant);
  planner = await signInAs(desk.app, world.people.planner);
});
afterAll(() => desk.stop());

async function snap(browser: Browser, lat: number, lng: number, phases: 'ABC' | 'one'): Promise<SnapView> {
  return (await browser.send('post', '/api/territory/snap', { lat, lng, phases }).expect(200))
    .body as SnapView;
}

describe('a pin on the map', () => {
  it('tells an applicant feeder, voltage, phases and distance, and never the node', async () => {
    const answer = await snap(applicant, 42.0203, -31, 'ABC');
    // 0.0003° of latitude on a sphere of 6371 km: 33.4 m.
    expect(answer).toEqual({
      found: { feeder: 'FX-1', substation: 'Fixture Head', kv: 12.47, phases: 'ABC', distanceMetres: 33 },
      reachMetres: 600,
    });
  });

  it('tells the utility’s people the node too', async () => {
    const { found } = await snap(planner, 42.0203, -31, 'ABC');
    expect(found?.node).toEqual({ modelCode: 'FX', id: 'n2', lat: 42.02, lng: -31 });
  });

  it('goes to the nearest node that has the phases, and to nothing beyond reach', async () => {
    const onLateral = await snap(planner, 42.02, -31.0095, 'one');
    expect(onLateral.found?.node?.id).toBe('n4');
    // n2, the nearest of three phases, is 785 m away.
    expect(await snap(planner, 42.02, -31.0095, 'ABC')).toEqual({ found: null, reachMetres: 600 });
  });

  it('never snaps to the substation itself, which is on no feeder', async () => {
    expect((await snap(planner, 42, -31, 'ABC')).found).toBeNull();
  });

  it('outside the world is refused with the words of its fields', async () => {
    const answer = await applicant.send('post', '/api/territory/snap', { lat: 91, lng: 0, phases: 'ABC' });
    expect(readProblem(answer)).toMatchObject({
      status: 400,
      errors: [{ path: 'lat', message: 'Latitude must be between −90 and 90' }],
    });
  });

  it('follows the model when a new version is published', async () => {
    await inTransaction(desk.deps.db, async (trx) => {
      const modelSha256 = await insertBlob(trx, Buffer.from(JSON.stringify(makeFixtureModel())));
      const versionId = await insertPublishedVersion(trx, {
        modelId: world.model.id,
        number: 2,
        modelSha256,
        absorbs: [],
        publishedBy: world.people.planner.id,
        publishedAt: new Date('2026-02-01T00:00:00Z'),
      });
      const moved = listFixtureNodes().map((node) => (node.nodeId === 'n3' ? { ...node, lat: 42.05 } : node));
      await insertModelNodes(trx, versionId, moved);
    });
    expect((await snap(planner, 42.05, -31, 'ABC')).found?.node?.id).toBe('n3');
    expect((await snap(planner, 42.03, -31, 'ABC')).found).toBeNull();
  });
});

describe('the territory', () => {
  it('has its layers for everybody who is signed in', async () => {
    const { body } = await applicant.get('/api/territory/layers').expect(200);
    expect(Object.keys(body as object)).toEqual(['outline', 'water', 'woods', 'parcels', 'roads', 'places']);
  });

  it('finds addresses by words in any order and case, and none for nothing', async () => {
    const search = async (text: string) =>
      (await applicant.get(`/api/territory/addresses?search=${encodeURIComponent(text)}`).expect(200))
        .body as AddressView[];
    expect((await search('saltwick LANE')).map(({ label }) => label)).toEqual([
      '4 Lateral Lane, Saltwick',
      '9 Lateral Lane, Saltwick',
    ]);
    expect(await search('harbour saltwick')).toEqual([]);
    expect(await search('')).toEqual([]);
  });
});

describe('the network models', () => {
  it('are listed for staff with their circuits and queue, and drawn by their lines', async () => {
    const models = (await planner.get('/api/models').expect(200)).body as NetworkModelView[];
    expect(models).toMatchObject([
      {
        code: 'FX',
        substation: 'Fixture Head',
        versionNumber: 2,
        nodeCount: 6,
        kv: 12.47,
        circuits: ['FX-1', 'FX-2'],
        queueLength: 0,
      },
    ]);
    const drawing = (await planner.get('/api/models/FX/drawing').expect(200)).body as ModelDrawing;
    expect(drawing.lines).toHaveLength(5);
    expect(drawing.lines).toContainEqual({
      circuit: 'FX-1',
      phases: 'B',
      path: [
        [-31, 42.02],
        [-31.01, 42.02],
      ],
      to: 'n4',
    });
    expect(drawing.devices[0]).toEqual({ id: 'cb1', kind: 'breaker', lng: -31, lat: 42 });
    expect(drawing.substation).toEqual({ lat: 42, lng: -31, name: 'Fixture Head' });
    await planner.get('/api/models/none/drawing').expect(404);
  });

  it('are closed to applicants', async () => {
    await applicant.get('/api/models').expect(403);
    await applicant.get('/api/models/FX/drawing').expect(403);
  });
});

describe('the equipment records', () => {
  it('are listed by kind, only the released ones', async () => {
    await desk.deps.db('equipment_versions').where({ public_id: 'battery' }).update({ state: 'withdrawn' });
    const all = (await applicant.get('/api/equipment').expect(200)).body as EquipmentView[];
    expect(all).toHaveLength(6);
    const { body } = await applicant.get('/api/equipment?kind=transformer').expect(200);
    const transformers = body as EquipmentView[];
    expect(transformers.map(({ publicId }) => publicId)).toEqual(['lowTransformer', 'mediumTransformer']);
    expect(transformers[0]).toEqual({
      publicId: 'lowTransformer',
      kind: 'transformer',
      maker: 'Harrowgate Winding',
      model: 'HW 1500/05',
      phases: 'three',
      ratings: { kva: 1500, kvHigh: 12.47, kvLow: 0.48, impedancePercent: 5.75, xr: 7 },
      certifiedUntil: null,
    });
    await applicant.get('/api/equipment?kind=boiler').expect(400);
  });
});
