import type { ApplicationEvent, Stage } from '../../shared/rules/application-life.ts';
import type { Role } from '../../shared/schemas/sessions.ts';
import type { Database, Transaction } from '../connection.ts';

export interface StageEvent {
  seq: number;
  event: ApplicationEvent;
  fromStage: Stage | null;
  toStage: Stage;
  /** Null when nobody did it: the desk itself. */
  actor: { name: string; role: Role } | null;
  note: string | null;
  at: Date;
}

export interface NewStageEvent {
  applicationId: number;
  event: ApplicationEvent;
  fromStage: Stage | null;
  toStage: Stage;
  actorId: number | null;
  note: string | null;
  at: Date;
}

/** The caller holds the application's lock, so that the next number is nobody else's. */
export async function insertStageEvent(trx: Transaction, event: NewStageEvent): Promise<void> {
  const [last] = await trx('stage_events')
    .where({ application_id: event.applicationId })
    .max<{ seq: number | null }[]>('seq as seq');
  await trx('stage_events').insert({
    application_id: event.applicationId,
    seq: (last?.seq ?? 0) + 1,
    event: event.event,
    from_stage: event.fromStage,
    to_stage: event.toStage,
    actor_id: event.actorId,
    note: event.note,
    at: event.at,
  });
}

interface StageEventRow extends Omit<StageEvent, 'actor'> {
  name: string | null;
  role: Role | null;
}

/** In the order in which they happened. */
export async function listStageEvents(db: Database, applicationId: number): Promise<StageEvent[]> {
  const rows = await db('stage_events')
    .leftJoin('users', 'users.id', 'stage_events.actor_id')
    .where({ application_id: applicationId })
    .orderBy('seq')
    .select<StageEventRow[]>({
      seq: 'seq',
      event: 'event',
      fromStage: 'from_stage',
      toStage: 'to_stage',
      note: 'note',
      at: 'at',
      name: 'users.name',
      role: 'users.role',
    });
  return rows.map(({ name, role, ...event }) => ({
    ...event,
    actor: name === null || role === null ? null : { name, role },
  }));
}
