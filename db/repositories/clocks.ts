import type { ClockRule } from '../../shared/schemas/rule-sets.ts';
import type { Database, Transaction } from '../connection.ts';

/** From a day on the other side had the ball, until a day; still open while `toOn` is null. */
export interface ClockPause {
  fromOn: string;
  toOn: string | null;
}

export interface Clock {
  id: number;
  applicationId: number;
  kind: string;
  unit: ClockRule['unit'];
  allowedDays: number;
  calendarId: number;
  startedOn: string;
  dueOn: string;
  stoppedAt: Date | null;
  pauses: ClockPause[];
}

type ClockRow = Omit<Clock, 'pauses'>;

const columns = {
  id: 'id',
  applicationId: 'application_id',
  kind: 'kind',
  unit: 'unit',
  allowedDays: 'allowed_days',
  calendarId: 'calendar_id',
  startedOn: 'started_on',
  dueOn: 'due_on',
  stoppedAt: 'stopped_at',
} as const satisfies Record<keyof ClockRow, string>;

/** Of all these applications, each one's from the first to the newest. */
export async function listClocks(db: Database, applicationIds: readonly number[]): Promise<Clock[]> {
  const clocks = await db('clocks')
    .whereIn('application_id', applicationIds)
    .orderBy('id')
    .select<ClockRow[]>(columns);
  const pauses = await db('clock_pauses')
    .whereIn(
      'clock_id',
      clocks.map((clock) => clock.id),
    )
    .orderBy('id')
    .select<(ClockPause & { clockId: number })[]>({ clockId: 'clock_id', fromOn: 'from_on', toOn: 'to_on' });
  return clocks.map((clock) => ({
    ...clock,
    pauses: pauses
      .filter((pause) => pause.clockId === clock.id)
      .map(({ fromOn, toOn }) => ({ fromOn, toOn })),
  }));
}

export async function insertClock(
  trx: Transaction,
  clock: Omit<ClockRow, 'id' | 'stoppedAt'>,
): Promise<void> {
  await trx('clocks').insert({
    application_id: clock.applicationId,
    kind: clock.kind,
    unit: clock.unit,
    allowed_days: clock.allowedDays,
    calendar_id: clock.calendarId,
    started_on: clock.startedOn,
    due_on: clock.dueOn,
  });
}

export async function stopClock(trx: Transaction, clockId: number, stoppedAt: Date): Promise<void> {
  await trx('clocks').where({ id: clockId }).update({ stopped_at: stoppedAt });
}

export async function moveDueDate(trx: Transaction, clockId: number, dueOn: string): Promise<void> {
  await trx('clocks').where({ id: clockId }).update({ due_on: dueOn });
}

export async function openPause(trx: Transaction, clockId: number, fromOn: string): Promise<void> {
  await trx('clock_pauses').insert({ clock_id: clockId, from_on: fromOn });
}

export async function closePause(trx: Transaction, clockId: number, toOn: string): Promise<void> {
  await trx('clock_pauses').where({ clock_id: clockId }).whereNull('to_on').update({ to_on: toOn });
}
