import type { PersonView, RuleSetVersionView } from '../../shared/schemas/people.ts';
import { getJson } from './client.ts';

export function listPeople(): Promise<PersonView[]> {
  return getJson('/api/people');
}

export function listRuleSets(): Promise<RuleSetVersionView[]> {
  return getJson('/api/rule-sets');
}
