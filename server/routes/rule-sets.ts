import { Type } from '@sinclair/typebox';
import { RuleConfirmation, RuleSetEdit, RuleSetPublication } from '../../shared/schemas/rule-set-edits.ts';
import { notFound } from '../errors.ts';
import { route } from '../route-definition.ts';
import { confirmRule } from '../services/rule-confirmations.ts';
import { deleteDraft, publishDraft, saveDraft, startDraft } from '../services/rule-set-drafts.ts';
import { previewRuleSet } from '../services/rule-set-previews.ts';
import { getRuleSet, listRuleSets } from '../services/rule-sets.ts';

const Nothing = Type.Object({}, { additionalProperties: false });
const Seen = Type.Object(
  { version: Type.Integer({ minimum: 1, errorMessage: 'Load the page again' }) },
  { additionalProperties: false },
);

/** Versions count from one; anything else in the path is nothing that could be there. */
function readNumber(text: string): number {
  if (!/^[1-9]\d{0,8}$/.test(text)) throw notFound('The rule set');
  return Number(text);
}

export const ruleSetRoutes = [
  route({
    method: 'get',
    path: '/rule-sets',
    action: 'rule-sets.read',
    handle: ({ deps, context }) => listRuleSets(deps, context),
  }),
  route({
    method: 'get',
    path: '/rule-sets/:code/:number',
    action: 'rule-sets.read',
    handle: ({ deps, context, params }) => getRuleSet(deps, context, params.code, readNumber(params.number)),
  }),
  route({
    method: 'get',
    path: '/rule-sets/:code/:number/preview',
    action: 'rule-sets.read',
    handle: ({ deps, params }) => previewRuleSet(deps, params.code, readNumber(params.number)),
  }),
  route({
    method: 'post',
    path: '/rule-sets/:code/:number/drafts',
    action: 'rule-sets.edit',
    body: Nothing,
    status: 201,
    handle: ({ deps, context, params }) => startDraft(deps, context, params.code, readNumber(params.number)),
  }),
  route({
    method: 'put',
    path: '/rule-sets/:code/:number',
    action: 'rule-sets.edit',
    body: RuleSetEdit,
    handle: ({ deps, context, params, body }) =>
      saveDraft(deps, context, params.code, readNumber(params.number), body),
  }),
  route({
    method: 'delete',
    path: '/rule-sets/:code/:number',
    action: 'rule-sets.edit',
    query: Seen,
    handle: ({ deps, context, params, query }) =>
      deleteDraft(deps, context, params.code, readNumber(params.number), query),
  }),
  route({
    method: 'post',
    path: '/rule-sets/:code/:number/publication',
    action: 'rule-sets.edit',
    body: RuleSetPublication,
    handle: ({ deps, context, params, body }) =>
      publishDraft(deps, context, params.code, readNumber(params.number), body),
  }),
  route({
    method: 'post',
    path: '/rule-sets/:code/:number/confirmations',
    action: 'rule-sets.edit',
    body: RuleConfirmation,
    handle: ({ deps, context, params, body }) =>
      confirmRule(deps, context, params.code, readNumber(params.number), body),
  }),
];
