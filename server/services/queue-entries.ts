import type { Transaction } from '../../db/connection.ts';
import { lockApplicationById, type Application } from '../../db/repositories/applications.ts';
import { takeQueuePosition, type NetworkModel } from '../../db/repositories/network-models.ts';
import {
  closeEntry,
  findOpenEntry,
  insertQueueEntry,
  listOpenEntries,
} from '../../db/repositories/queue-entries.ts';
import { getRevision } from '../../db/repositories/revisions.ts';
import { stageWords } from '../../shared/wording.ts';
import type { Context } from '../context.ts';
import type { RequestedRun } from './announcements.ts';
import { recordAudit } from './audit.ts';
import { requestRun } from './run-requests.ts';
import { screenedStages } from './screened-stages.ts';

/** Gives the application its place; the caller holds the model's lock. */
export async function enterQueue(
  trx: Transaction,
  context: Context,
  model: NetworkModel,
  application: Application,
): Promise<number> {
  if (application.revisionId === null) throw new Error(`Application row ${application.id} has no revision`);
  const revision = await getRevision(trx, application.revisionId);
  const position = await takeQueuePosition(trx, model);
  await insertQueueEntry(trx, {
    modelId: model.id,
    position,
    applicationId: application.id,
    revisionId: revision.id,
    circuit: revision.circuit,
    poiNode: revision.poiNode,
    enteredAt: context.now,
  });
  return position;
}

/**
 * Takes the application out of the queue and asks for a new official run of every project behind it that still waits
 * for a decision. The caller holds the model's lock, which comes before all of these rows', and hands the application
 * as it is after its last step: withdrawn, denied or lapsed.
 */
export async function leaveQueue(
  trx: Transaction,
  context: Context,
  application: Application,
): Promise<RequestedRun[]> {
  const own = await findOpenEntry(trx, application.id);
  if (own === undefined) return [];
  const reason = stageWords[application.stage].label;
  await closeEntry(trx, own, context.now, reason);
  const behind = (await listOpenEntries(trx, own.modelId)).filter((entry) => entry.position > own.position);
  const runs: RequestedRun[] = [];
  for (const entry of behind) {
    const other = await lockApplicationById(trx, entry.applicationId);
    if (other === undefined || !screenedStages.includes(other.stage)) continue;
    const run = await requestRun(trx, context, other, 'official');
    const chain = `application:${other.publicId}` as const;
    await recordAudit(trx, context, chain, 'screen-again', `run:${run.publicId}`, null, {
      reason: `A project ahead left the queue: ${reason}`,
    });
    runs.push(run);
  }
  return runs;
}
