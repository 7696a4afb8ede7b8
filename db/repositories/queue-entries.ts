import type { Database, Transaction } from '../connection.ts';

/** A place in the queue of a network model. */
export interface QueueEntry {
  modelId: number;
  position: number;
  applicationId: number;
  revisionId: number;
}

const columns = {
  modelId: 'model_id',
  position: 'position',
  applicationId: 'application_id',
  revisionId: 'revision_id',
} as const satisfies Record<keyof QueueEntry, string>;

export interface NewQueueEntry extends QueueEntry {
  circuit: string | null;
  poiNode: string;
  enteredAt: Date;
}

export async function insertQueueEntry(trx: Transaction, entry: NewQueueEntry): Promise<void> {
  await trx('queue_entries').insert({
    model_id: entry.modelId,
    position: entry.position,
    application_id: entry.applicationId,
    revision_id: entry.revisionId,
    circuit: entry.circuit,
    poi_node: entry.poiNode,
    entered_at: entry.enteredAt,
  });
}

/** Those that have not left, from the first in line to the last. */
export async function listOpenEntries(db: Database, modelId: number): Promise<QueueEntry[]> {
  return db('queue_entries')
    .where({ model_id: modelId })
    .whereNull('left_at')
    .orderBy('position')
    .select<QueueEntry[]>(columns);
}

export async function findOpenEntry(db: Database, applicationId: number): Promise<QueueEntry | undefined> {
  const [entry] = await db('queue_entries')
    .where({ application_id: applicationId })
    .whereNull('left_at')
    .select<QueueEntry[]>(columns);
  return entry;
}

export async function closeEntry(
  trx: Transaction,
  entry: QueueEntry,
  leftAt: Date,
  reason: string,
): Promise<void> {
  await trx('queue_entries')
    .where({ model_id: entry.modelId, position: entry.position })
    .update({ left_at: leftAt, reason });
}
