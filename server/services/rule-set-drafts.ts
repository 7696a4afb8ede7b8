import { createHash } from 'node:crypto';
import { inTransaction, type Transaction } from '../../db/connection.ts';
import { systemChain } from '../../db/repositories/audit-entries.ts';
import {
  copyRuleConfirmations,
  deleteRuleConfirmations,
  insertRuleConfirmation,
} from '../../db/repositories/rule-confirmations.ts';
import {
  deleteDraftRuleSet,
  findRuleSetVersion,
  insertDraftRuleSet,
  lockRuleSetVersion,
  publishRuleSet,
  takeRuleSetNumber,
  updateDraftRuleSet,
  type RuleSetVersion,
} from '../../db/repositories/rule-sets.ts';
import { formatDate, formatInstant } from '../../shared/format.ts';
import { isLocalDate } from '../../shared/rules/business-days.ts';
import { editRuleSet, listChangedRules } from '../../shared/rules/rule-set-edits.ts';
import type { RuleSetEdit, RuleSetPublication } from '../../shared/schemas/rule-set-edits.ts';
import type { RuleSetRow, RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import { listAsked, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, invalid, notFound, refused } from '../errors.ts';
import { recordAudit } from './audit.ts';
import { getEarliestFrom, getRuleSet, listAvailable, listRuleSets, nameRuleSet } from './rule-sets.ts';
import { getUtilitySettings } from './utility-settings.ts';

function write(content: RuleSet): { text: string; sha256: Buffer } {
  const text = JSON.stringify(content);
  return { text, sha256: createHash('sha256').update(text, 'utf8').digest() };
}

/** The draft, locked, as the person has seen it; what is published is not to be had for changing. */
async function lockDraft(
  trx: Transaction,
  code: string,
  number: number,
  seenVersion: number,
): Promise<RuleSetVersion> {
  const draft = await lockRuleSetVersion(trx, code, number);
  if (draft === undefined) throw notFound('The rule set');
  if (draft.state !== 'draft') {
    throw conflict(
      'rule-set-published',
      'This version is published and stays as it is; begin a draft from it to change anything',
    );
  }
  if (draft.version === seenVersion) return draft;
  const { timeZone } = await getUtilitySettings(trx);
  const at = draft.editedAt === null ? '' : ` on ${formatInstant(draft.editedAt.toISOString(), timeZone)}`;
  const words = `${draft.editedBy ?? 'Somebody'} changed this draft${at}; load the page again`;
  throw conflict('version-conflict', words);
}

/** What was confirmed at once stands rule by rule beside the copy, so that a changed rule alone loses it. */
async function copyConfirmations(trx: Transaction, parent: RuleSetVersion, draftId: number): Promise<void> {
  await copyRuleConfirmations(trx, parent.id, draftId);
  if (parent.confirmedAt === null) return;
  for (const { id } of listAsked(parent.content)) {
    const confirmation = { versionId: draftId, question: id, by: null, at: parent.confirmedAt };
    await insertRuleConfirmation(trx, confirmation);
  }
}

/** Begins the next version of a rule set as a copy of any version there is. */
export async function startDraft(
  deps: Deps,
  context: SignedInContext,
  code: string,
  number: number,
): Promise<RuleSetView> {
  const draftNumber = await inTransaction(deps.db, async (trx) => {
    const next = await takeRuleSetNumber(trx, code);
    const parent = await findRuleSetVersion(trx, code, number);
    if (parent === undefined) throw notFound('The rule set');
    const content = { ...parent.content, number: next };
    const by = { editedBy: context.actor.id, editedAt: context.now };
    const draftId = await insertDraftRuleSet(trx, { content, ...write(content), ...by });
    await copyConfirmations(trx, parent, draftId);
    const about = { from: nameRuleSet(parent), fromSha256: parent.sha256.toString('hex') };
    const subject = nameRuleSet({ code, number: next });
    await recordAudit(trx, context, systemChain, 'begin-rule-set', subject, null, about);
    return next;
  });
  return getRuleSet(deps, context, code, draftNumber);
}

/** The parts that differ, as they were and as they are, for the trail. */
function describeChange(before: RuleSet, after: RuleSet) {
  const parts = ['name', 'rules', 'fastTrack', 'clocks', 'fees'] as const;
  const changed = parts.filter((part) => JSON.stringify(before[part]) !== JSON.stringify(after[part]));
  const pick = (content: RuleSet) => {
    const shown = Object.fromEntries(changed.map((part) => [part, content[part] ?? null]));
    if (changed.includes('rules')) {
      const ids = Object.keys({ ...before.rules, ...after.rules }) as (keyof RuleSet['rules'])[];
      const differs = (id: keyof RuleSet['rules']) =>
        JSON.stringify(before.rules[id]) !== JSON.stringify(after.rules[id]);
      shown.rules = Object.fromEntries(ids.filter(differs).map((id) => [id, content.rules[id] ?? null]));
    }
    // Through text, so that what is absent is absent in the trail, too.
    return JSON.parse(JSON.stringify(shown)) as object;
  };
  return { before: pick(before), after: pick(after) };
}

/** Saves one page of a draft; a rule whose clause, numbers or terms change has to be confirmed anew. */
export async function saveDraft(
  deps: Deps,
  context: SignedInContext,
  code: string,
  number: number,
  edit: RuleSetEdit,
): Promise<RuleSetView> {
  await inTransaction(deps.db, async (trx) => {
    const draft = await lockDraft(trx, code, number, edit.version);
    const { content, problems } = editRuleSet(draft.content, listAvailable(draft.content), edit);
    if (problems.length > 0) throw invalid(problems);
    const by = { editedBy: context.actor.id, editedAt: context.now };
    await updateDraftRuleSet(trx, draft.id, { ...write(content), ...by });
    await deleteRuleConfirmations(trx, draft.id, listChangedRules(draft.content, content));
    const { before, after } = describeChange(draft.content, content);
    await recordAudit(trx, context, systemChain, 'save-rule-set', nameRuleSet(draft), before, after);
  });
  return getRuleSet(deps, context, code, number);
}

export async function deleteDraft(
  deps: Deps,
  context: SignedInContext,
  code: string,
  number: number,
  { version }: { version: number },
): Promise<RuleSetRow[]> {
  await inTransaction(deps.db, async (trx) => {
    const draft = await lockDraft(trx, code, number, version);
    await deleteDraftRuleSet(trx, draft.id);
    const before = { sha256: draft.sha256.toString('hex'), name: draft.content.name };
    await recordAudit(trx, context, systemChain, 'delete-rule-set', nameRuleSet(draft), before, null);
  });
  return listRuleSets(deps, context);
}

async function checkValidFrom(trx: Transaction, context: SignedInContext, validFrom: string): Promise<void> {
  const path = 'validFrom';
  if (!isLocalDate(validFrom)) throw invalid([{ path, message: 'There is no such day' }]);
  const earliest = await getEarliestFrom(trx, context);
  if (validFrom >= earliest) return;
  throw invalid([
    { path, message: `Must be ${formatDate(earliest)} or later: today’s rules stay those of today` },
  ]);
}

/** Puts a draft into force from a day on, for good. Applications that are bound already keep their rules. */
export async function publishDraft(
  deps: Deps,
  context: SignedInContext,
  code: string,
  number: number,
  { version, validFrom }: RuleSetPublication,
): Promise<RuleSetView> {
  await inTransaction(deps.db, async (trx) => {
    const draft = await lockDraft(trx, code, number, version);
    await checkValidFrom(trx, context, validFrom);
    if (draft.content.queueOrder === 'receipt') {
      throw refused('queue-order', 'This version of the desk orders the queue by completeness only');
    }
    await publishRuleSet(trx, draft.id, { validFrom, by: context.actor.id, at: context.now });
    const after = { state: 'published', validFrom, sha256: draft.sha256.toString('hex') };
    const before = { state: 'draft' };
    await recordAudit(trx, context, systemChain, 'publish-rule-set', nameRuleSet(draft), before, after);
  });
  return getRuleSet(deps, context, code, number);
}
