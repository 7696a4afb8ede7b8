import type { Transaction } from '../../db/connection.ts';
import { updateApplication, type Application } from '../../db/repositories/applications.ts';
import { findNewestRun, insertRun } from '../../db/repositories/runs.ts';
import { resultsVersion } from '../../shared/results-version.ts';
import type { RunKind } from '../../shared/schemas/runs.ts';
import type { Context } from '../context.ts';
import type { RequestedRun } from './announcements.ts';
import { composeBasis } from './bases.ts';
import { newPublicId } from './public-ids.ts';

/**
 * Freezes what the run is to be computed from and writes its row; the caller holds the application's lock and hands
 * the row as it is after its own changes. A run that still waits or works on the same basis is the one asked for.
 */
export async function requestRun(
  trx: Transaction,
  context: Pick<Context, 'now'>,
  application: Application,
  kind: RunKind,
): Promise<RequestedRun> {
  const { text, sha256 } = await composeBasis(trx, context, application, kind);
  const newest = await findNewestRun(trx, application.id);
  const isUnderWay = newest?.kind === kind && (newest.state === 'queued' || newest.state === 'running');
  if (newest !== undefined && isUnderWay && newest.basisSha256.equals(sha256)) {
    return { id: newest.id, publicId: newest.publicId, applicationPublicId: application.publicId };
  }
  const publicId = newPublicId();
  const id = await insertRun(trx, {
    publicId,
    applicationId: application.id,
    kind,
    basis: text,
    basisSha256: sha256,
    resultsVersion,
    queuedAt: context.now,
  });
  await updateApplication(trx, application.id, { runId: id });
  return { id, publicId, applicationPublicId: application.publicId };
}
