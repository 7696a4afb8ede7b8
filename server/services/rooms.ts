import { inTransaction, type Database } from '../../db/connection.ts';
import { findNewestRoom, insertRoom, type ModelRoom } from '../../db/repositories/model-rooms.ts';
import { getModelVersion } from '../../db/repositories/model-versions.ts';
import { findNetworkModel, type NetworkModel } from '../../db/repositories/network-models.ts';
import { listOpenEntries } from '../../db/repositories/queue-entries.ts';
import { getRuleSetVersion, getValidRuleSet } from '../../db/repositories/rule-sets.ts';
import { canonicalJson } from '../../shared/canonical-json.ts';
import { resultsVersion } from '../../shared/results-version.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type { RoomView } from '../../shared/schemas/rooms.ts';
import type { Context, Deps, SignedInContext } from '../context.ts';
import { notFound } from '../errors.ts';
import { newPublicId } from './public-ids.ts';
import { getUtilitySettings } from './utility-settings.ts';

/** What the room of a model rests on: row ids of what never changes. */
export interface RoomBasis {
  modelVersionId: number;
  /** Everybody in the queue, in the order of their places. */
  aheadRevisionIds: number[];
  ruleSetVersionId: number;
  resultsVersion: number;
}

type PublishedModel = NetworkModel & { publishedVersionId: number };

async function getPublishedModel(db: Database, code: string): Promise<PublishedModel> {
  const model = await findNetworkModel(db, code);
  if (model === undefined || model.publishedVersionId === null) throw notFound('The network model');
  return { ...model, publishedVersionId: model.publishedVersionId };
}

/** The basis as it is at this moment: the published version with everybody in its queue, by the rules of today. */
async function composeRoomBasis(
  db: Database,
  { now }: Pick<Context, 'now'>,
  { id, publishedVersionId }: PublishedModel,
): Promise<string> {
  const { absorbs } = await getModelVersion(db, publishedVersionId);
  const entries = await listOpenEntries(db, id);
  const { timeZone } = await getUtilitySettings(db);
  const basis: RoomBasis = {
    modelVersionId: publishedVersionId,
    aheadRevisionIds: entries
      .filter(({ applicationId }) => !absorbs.includes(applicationId))
      .map(({ revisionId }) => revisionId),
    ruleSetVersionId: (await getValidRuleSet(db, localDate(now, timeZone))).id,
    resultsVersion,
  };
  return canonicalJson(basis);
}

async function makeRoomView(
  deps: Deps,
  context: SignedInContext,
  model: PublishedModel,
  found: ModelRoom,
): Promise<RoomView> {
  const { modelVersionId, ruleSetVersionId } = JSON.parse(found.basis) as RoomBasis;
  const { content } = await getRuleSetVersion(deps.db, ruleSetVersionId);
  return {
    publicId: found.publicId,
    modelCode: model.code,
    modelVersion: (await getModelVersion(deps.db, modelVersionId)).number,
    ruleSet: `${content.name}, version ${content.number}`,
    state: found.state,
    percent: found.percent,
    askedBy: found.askedBy,
    askedAt: found.askedAt.toISOString(),
    finishedAt: found.finishedAt?.toISOString() ?? null,
    error: found.error,
    stale: (await composeRoomBasis(deps.db, context, model)) !== found.basis,
    room: found.room,
  };
}

/** The newest room of a model; null before somebody asked for the first. */
export async function findRoomView(
  deps: Deps,
  context: SignedInContext,
  code: string,
): Promise<RoomView | null> {
  const model = await getPublishedModel(deps.db, code);
  const newest = await findNewestRoom(deps.db, model.id);
  return newest === undefined ? null : makeRoomView(deps, context, model, newest);
}

/** Asks the worker for the room of a model as it stands; what is under way on the same basis is the one asked for. */
export async function askForRoom(deps: Deps, context: SignedInContext, code: string): Promise<RoomView> {
  const model = await getPublishedModel(deps.db, code);
  const id = await inTransaction(deps.db, async (trx) => {
    const basis = await composeRoomBasis(trx, context, model);
    const newest = await findNewestRoom(trx, model.id);
    const isUnderWay = newest?.state === 'queued' || newest?.state === 'running';
    if (newest && isUnderWay && newest.basis === basis) return undefined;
    const by = { askedBy: context.actor.id, askedAt: context.now };
    return insertRoom(trx, { publicId: newPublicId(), modelId: model.id, basis, ...by });
  });
  if (id !== undefined) await deps.queue.enqueueRoom(id, 0);
  return (await findRoomView(deps, context, code))!;
}
