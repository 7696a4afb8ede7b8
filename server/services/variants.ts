import { inTransaction } from '../../db/connection.ts';
import { findApplication, lockApplicationById } from '../../db/repositories/applications.ts';
import { listFindings } from '../../db/repositories/runs.ts';
import { deleteVariant, insertVariant, listVariants, type Variant } from '../../db/repositories/variants.ts';
import { pairFindings } from '../../shared/rules/pair-findings.ts';
import type { VariantRequest, VariantView } from '../../shared/schemas/trials.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, notFound } from '../errors.ts';
import { recordAudit } from './audit.ts';
import { newPublicId } from './public-ids.ts';
import { computeTrial } from './trials.ts';

/** More than anyone compares; a limit to what one application can pile up. */
const mostKept = 50;

async function makeView(deps: Deps, variant: Variant): Promise<VariantView> {
  return {
    publicId: variant.publicId,
    runId: variant.runPublicId,
    name: variant.name,
    changes: variant.changes,
    pairs: pairFindings(await listFindings(deps.db, variant.runId), variant.findings),
    keptBy: variant.keptBy,
    keptAt: variant.keptAt.toISOString(),
  };
}

/** The trials that were kept, the newest first. */
export async function listKeptTrials(deps: Deps, applicationPublicId: string): Promise<VariantView[]> {
  const application = await findApplication(deps.db, applicationPublicId);
  if (application === undefined) throw notFound('The application');
  const variants = await listVariants(deps.db, application.id);
  return Promise.all(variants.map((variant) => makeView(deps, variant)));
}

/** Computes a trial here and now and keeps it under a name of its own. */
export async function keepTrial(
  deps: Deps,
  context: SignedInContext,
  applicationPublicId: string,
  request: VariantRequest,
): Promise<VariantView> {
  const { application, run, ofRun, ofTrial } = await computeTrial(deps, applicationPublicId, request);
  const { changes } = request;
  const name = request.name.trim();
  const publicId = newPublicId();
  await inTransaction(deps.db, async (trx) => {
    await lockApplicationById(trx, application.id);
    const known = await listVariants(trx, application.id);
    if (known.some((each) => each.name.toLowerCase() === name.toLowerCase())) {
      throw conflict('name-taken', `A trial is already kept under the name “${name}”`);
    }
    if (known.length >= mostKept) {
      throw conflict('too-many-trials', `${mostKept} trials are kept; delete one to keep another`);
    }
    await insertVariant(trx, {
      ...{ publicId, applicationId: application.id, runId: run.id, name, changes, findings: ofTrial },
      ...{ keptBy: context.actor.id, keptAt: context.now },
    });
    const chain = `application:${applicationPublicId}` as const;
    await recordAudit(trx, context, chain, 'keep-trial', `variant:${publicId}`, null, {
      name,
      changes,
      runId: run.publicId,
    });
  });
  const by = { keptBy: context.actor.name, keptAt: context.now.toISOString() };
  return { publicId, runId: run.publicId, name, changes, pairs: pairFindings(ofRun, ofTrial), ...by };
}

export async function deleteKeptTrial(
  deps: Deps,
  context: SignedInContext,
  applicationPublicId: string,
  publicId: string,
): Promise<void> {
  const application = await findApplication(deps.db, applicationPublicId);
  if (application === undefined) throw notFound('The application');
  await inTransaction(deps.db, async (trx) => {
    await lockApplicationById(trx, application.id);
    const known = await listVariants(trx, application.id);
    const variant = known.find((each) => each.publicId === publicId);
    if (variant === undefined) throw notFound('The kept trial');
    await deleteVariant(trx, application.id, publicId);
    const chain = `application:${applicationPublicId}` as const;
    const { name, changes, runPublicId: runId } = variant;
    const before = { name, changes, runId };
    await recordAudit(trx, context, chain, 'delete-trial', `variant:${publicId}`, before, null);
  });
}
