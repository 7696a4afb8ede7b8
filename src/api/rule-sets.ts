import type { RuleSetEdit, RuleSetPublication } from '../../shared/schemas/rule-set-edits.ts';
import type { RuleSetPreview, RuleSetRow, RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import { getJson, sendJson } from './client.ts';

const pathOf = (code: string, number: number) => `/api/rule-sets/${encodeURIComponent(code)}/${number}`;

export function listRuleSets(): Promise<RuleSetRow[]> {
  return getJson('/api/rule-sets');
}

export function getRuleSet(code: string, number: number): Promise<RuleSetView> {
  return getJson(pathOf(code, number));
}

export function previewRuleSet(code: string, number: number): Promise<RuleSetPreview> {
  return getJson(`${pathOf(code, number)}/preview`);
}

export function startDraft(code: string, number: number): Promise<RuleSetView> {
  return sendJson('POST', `${pathOf(code, number)}/drafts`, {});
}

/** Numbers that could not be read go as they were typed: the server names them at their fields. */
export function saveDraft(code: string, number: number, edit: RuleSetEdit): Promise<RuleSetView> {
  return sendJson('PUT', pathOf(code, number), edit);
}

export function deleteDraft(code: string, number: number, version: number): Promise<RuleSetRow[]> {
  return sendJson('DELETE', `${pathOf(code, number)}?version=${version}`);
}

export function publishDraft(code: string, number: number, body: RuleSetPublication): Promise<RuleSetView> {
  return sendJson('POST', `${pathOf(code, number)}/publication`, body);
}

export function confirmRule(code: string, number: number, question: string): Promise<RuleSetView> {
  return sendJson('POST', `${pathOf(code, number)}/confirmations`, { question });
}
