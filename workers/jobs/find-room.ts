import { randomBytes } from 'node:crypto';
import type { Database } from '../../db/connection.ts';
import {
  claimRoom,
  failRoom,
  finishRoom,
  listForgottenRooms,
  renewRoom,
  requeueAbandonedRooms,
  type RoomTurn,
} from '../../db/repositories/model-rooms.ts';
import { getRuleSetPart } from '../../db/repositories/study-parts.ts';
import type { Compute } from '../../server/compute.ts';
import type { Deps } from '../../server/context.ts';
import type { OpenQueue } from '../../server/queue.ts';
import type { RoomBasis } from '../../server/services/rooms.ts';
import { composePlaceStudy } from '../../server/services/studies.ts';

export interface RoomDeps extends Pick<Deps, 'log'> {
  db: Database;
  compute: Pick<Compute, 'ask'>;
  now(): Date;
  leaseSeconds: number;
}

const mostAttempts = 3;
/** Between two writings of how far it is. */
const progressMs = 500;

/** Writes how far it is now and then, and holds the turn; what cannot be written is told at the next finish. */
function followRoom(deps: RoomDeps, turn: RoomTurn): (done: number, total: number) => void {
  let last = 0;
  return (done, total) => {
    const now = deps.now();
    if (now.getTime() - last < progressMs) return;
    last = now.getTime();
    const leaseUntil = new Date(last + deps.leaseSeconds * 1000);
    renewRoom(deps.db, turn, leaseUntil, Math.floor((done / total) * 100)).catch((error: unknown) =>
      deps.log.warn({ err: error, roomId: turn.id }, 'The progress of a room'),
    );
  };
}

async function computeRoom(deps: RoomDeps, turn: RoomTurn): Promise<void> {
  const { modelVersionId, aheadRevisionIds, ruleSetVersionId } = JSON.parse(turn.basis) as RoomBasis;
  const { bytes } = await composePlaceStudy(deps.db, modelVersionId, aheadRevisionIds);
  const ruleSet = await getRuleSetPart(deps.db, ruleSetVersionId);
  const tell = followRoom(deps, turn);
  const answer = await deps.compute.ask('room', { studyBytes: bytes, ruleSet }, ({ done, total }) =>
    tell(done, total),
  );
  if (answer.kind === 'refused') {
    const error = `The model does not hold together: ${answer.problems.join('; ')}`;
    await failRoom(deps.db, turn, { error, isParked: true, now: deps.now() });
    return;
  }
  await finishRoom(deps.db, turn, answer.room, deps.now());
}

/** Works out the room of a model, if it is still to be had. */
export async function findRoomOfModel(deps: RoomDeps, roomId: number): Promise<void> {
  const leaseUntil = new Date(deps.now().getTime() + deps.leaseSeconds * 1000);
  const turn = await claimRoom(deps.db, { id: roomId, token: randomBytes(16), leaseUntil });
  if (turn === undefined) return;
  try {
    await computeRoom(deps, turn);
  } catch (fault) {
    const error = fault instanceof Error ? fault.message : String(fault);
    const isParked = turn.attempt >= mostAttempts;
    deps.log.warn({ err: fault, roomId }, isParked ? 'A room is parked' : 'A room goes back into the queue');
    await failRoom(deps.db, turn, { error, isParked, now: deps.now() });
  }
}

/** Finds rooms whose worker is gone, and those that never reached the queue. */
export async function sweepRooms(
  deps: Pick<RoomDeps, 'db' | 'now'> & {
    queue: Pick<OpenQueue, 'tryEnqueueRoom'>;
    queuedGraceSeconds: number;
  },
): Promise<void> {
  const now = deps.now();
  await requeueAbandonedRooms(deps.db, now);
  const queuedBefore = new Date(now.getTime() - deps.queuedGraceSeconds * 1000);
  for (const { id, attempt } of await listForgottenRooms(deps.db, queuedBefore)) {
    if (!(await deps.queue.tryEnqueueRoom(id, attempt))) return;
  }
}
