import type { Room, RoomState } from '../../shared/schemas/rooms.ts';
import type { Database, Transaction } from '../connection.ts';

export interface ModelRoom {
  id: number;
  publicId: string;
  modelId: number;
  /** JSON as it was frozen. */
  basis: string;
  state: RoomState;
  attempt: number;
  percent: number;
  room: Room | null;
  error: string | null;
  askedBy: string;
  askedAt: Date;
  finishedAt: Date | null;
}

export async function findNewestRoom(db: Database, modelId: number): Promise<ModelRoom | undefined> {
  const row = await db('model_rooms')
    .join('users', 'users.id', 'model_rooms.asked_by')
    .where({ model_id: modelId })
    .orderBy('model_rooms.id', 'desc')
    .first<(Omit<ModelRoom, 'room'> & { room: string | null }) | undefined>({
      id: 'model_rooms.id',
      publicId: 'model_rooms.public_id',
      modelId: 'model_id',
      basis: 'basis',
      state: 'state',
      attempt: 'attempt',
      percent: 'percent',
      room: 'room',
      error: 'error',
      askedBy: 'users.name',
      askedAt: 'asked_at',
      finishedAt: 'finished_at',
    });
  return row && { ...row, room: JSON.parse(row.room ?? 'null') as Room | null };
}

interface NewRoom {
  publicId: string;
  modelId: number;
  basis: string;
  askedBy: number;
  askedAt: Date;
}

export async function insertRoom(trx: Transaction, room: NewRoom): Promise<number> {
  const [id] = await trx('model_rooms').insert({
    public_id: room.publicId,
    model_id: room.modelId,
    basis: room.basis,
    state: 'queued' satisfies RoomState,
    asked_by: room.askedBy,
    asked_at: room.askedAt,
    queued_at: room.askedAt,
  });
  return id as number;
}

/** A worker's turn at a room: it holds as long as the row carries its token. */
export interface RoomTurn {
  id: number;
  basis: string;
  attempt: number;
  token: Buffer;
}

/** Takes a room that waits; undefined when it is somebody else's, or done. */
export async function claimRoom(
  db: Database,
  claim: { id: number; token: Buffer; leaseUntil: Date },
): Promise<RoomTurn | undefined> {
  const { id, token, leaseUntil } = claim;
  const taken = await db('model_rooms')
    .where({ id, state: 'queued' })
    .update({ state: 'running', token, lease_until: leaseUntil, percent: 0, attempt: db.raw('attempt + 1') });
  if (taken !== 1) return undefined;
  const row = await db('model_rooms').where({ id }).first<Omit<RoomTurn, 'token'>>('id', 'basis', 'attempt');
  return { ...row, token };
}

/** Changes the row while the turn holds; false when it is lost. */
async function updateTurn(db: Database, { id, token }: RoomTurn, update: object): Promise<boolean> {
  return (await db('model_rooms').where({ id, state: 'running', token }).update(update)) === 1;
}

export function renewRoom(db: Database, turn: RoomTurn, leaseUntil: Date, percent: number): Promise<boolean> {
  return updateTurn(db, turn, { lease_until: leaseUntil, percent });
}

export function finishRoom(db: Database, turn: RoomTurn, room: Room, now: Date): Promise<boolean> {
  const done = { state: 'finished', percent: 100, token: null, lease_until: null, finished_at: now };
  return updateTurn(db, turn, { ...done, room: JSON.stringify(room), error: null });
}

/** For good where it is parked, else back into the queue from where the sweep fetches it. */
export function failRoom(
  db: Database,
  turn: RoomTurn,
  failure: { error: string; isParked: boolean; now: Date },
): Promise<boolean> {
  const { error, isParked, now } = failure;
  const ended = isParked ? { state: 'failed', finished_at: now } : { state: 'queued', queued_at: now };
  return updateTurn(db, turn, { ...ended, error, token: null, lease_until: null });
}

/** Rooms that wait since before the grace period, whose job never reached the queue or broke off. */
export async function listForgottenRooms(
  db: Database,
  queuedBefore: Date,
): Promise<{ id: number; attempt: number }[]> {
  return db('model_rooms')
    .where({ state: 'queued' })
    .andWhere('queued_at', '<=', queuedBefore)
    .orderBy('id')
    .limit(100)
    .select<{ id: number; attempt: number }[]>('id', 'attempt');
}

/** Rooms whose worker no longer renews its lease go back into the queue; gives how many. */
export async function requeueAbandonedRooms(db: Database, now: Date): Promise<number> {
  return db('model_rooms')
    .where({ state: 'running' })
    .andWhere('lease_until', '<', now)
    .update({ state: 'queued', token: null, lease_until: null, queued_at: now });
}
