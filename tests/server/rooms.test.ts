import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { RoomView } from '../../shared/schemas/rooms.ts';
import { findRoomOfModel, sweepRooms } from '../../workers/jobs/find-room.ts';
import { makeFixtureDesk, type FixtureDesk } from '../support/fixture-desk.ts';

let desk: FixtureDesk;
let path: string;
beforeAll(async () => {
  desk = await makeFixtureDesk();
  path = `/api/models/${desk.world.model.code}/room`;
});
afterAll(() => desk.stop());

const ask = () => desk.as.reviewer.send('post', path, {});
const read = async () => ((await desk.as.planner.get(path)).body as { room: RoomView | null }).room;
const makeJob = () => {
  const { db, log, compute } = desk.deps;
  return { db, log, compute, now: () => new Date(), leaseSeconds: 60 };
};

describe('the room of a model', () => {
  it('is nothing before somebody asks, then waits for the worker, once however often it is asked for', async () => {
    expect(await read()).toBeNull();
    const asked = await ask();
    expect(asked.status).toBe(202);
    expect(asked.body).toMatchObject({
      state: 'queued',
      percent: 0,
      stale: false,
      askedBy: desk.world.people.reviewer.name,
    });
    expect(((await ask()).body as RoomView).publicId).toBe((asked.body as RoomView).publicId);
    expect(desk.enqueuedRooms).toHaveLength(1);
  });

  it('has every three-phase node with its largest plants, and what binds, when the worker has been there', async () => {
    await findRoomOfModel(makeJob(), desk.enqueuedRooms[0]!.roomId);
    const view = await read();
    expect(view).toMatchObject({ state: 'finished', percent: 100, stale: false });
    expect(view!.room!.nodes.map(({ node }) => node)).toEqual(['bus', 'n1', 'n2', 'n3', 'n5']);
    const { inverters } = view!.room!.nodes.find(({ node }) => node === 'n2')!;
    // 15 % of section s1's peak of 9 MW, by which the fixture's circuit is bound.
    expect(inverters.bindsAt).toMatchObject({ question: 'section-peak-load' });
    const { counted, notCounted } = view!.room!;
    expect(counted).toEqual(expect.arrayContaining(['contribution', 'rapid-voltage-change', 'reverse-flow']));
    // What takes a study at every size, and what hangs on the plant itself.
    expect(notCounted).toEqual(expect.arrayContaining(['steady-voltage', 'effective-grounding']));
    expect(counted.filter((id) => notCounted.includes(id))).toEqual([]);
  });

  it('is worked out once: a second worker finds nothing to do', async () => {
    const before = await read();
    await findRoomOfModel(makeJob(), desk.enqueuedRooms[0]!.roomId);
    expect(await read()).toEqual(before);
  });

  it('that breaks off goes back into the queue, and is parked after the third time', async () => {
    await ask();
    const { roomId } = desk.enqueuedRooms.at(-1)!;
    const compute = { ask: () => Promise.reject(new Error('The child is gone')) };
    for (const state of ['queued', 'queued', 'failed']) {
      await findRoomOfModel({ ...makeJob(), compute }, roomId);
      expect(await read()).toMatchObject({ state, error: 'The child is gone' });
    }
  });

  it('whose worker is gone, or whose job was lost, is found by the sweep', async () => {
    await ask();
    const { roomId } = desk.enqueuedRooms.at(-1)!;
    const past = new Date(Date.now() - 60_000);
    await desk.deps.db('model_rooms').where({ id: roomId }).update({ state: 'running', lease_until: past });
    const found: number[] = [];
    const queue = { tryEnqueueRoom: (id: number) => Promise.resolve(found.push(id) > 0) };
    const later = () => new Date(Date.now() + 1000);
    await sweepRooms({ db: desk.deps.db, now: later, queue, queuedGraceSeconds: 0 });
    expect(found).toEqual([roomId]);
    expect(await read()).toMatchObject({ state: 'queued' });
  });

  it('is asked for by reviewers and planners, and read by staff alone', async () => {
    expect((await desk.as.auditor.send('post', path, {})).status).toBe(403);
    expect((await desk.as.applicant.get(path)).status).toBe(403);
  });
});
