import type { QuestionId } from '../../../shared/schemas/findings.ts';
import { ruleOf } from './judge.ts';
import type { Screening } from './screening.ts';

/** A number that the rule of a question gives besides its limits; nothing where it gives none. */
export function numberParameter(screening: Screening, id: QuestionId, name: string): number | undefined {
  const value = ruleOf(screening, id).parameters?.[name];
  return typeof value === 'number' ? value : undefined;
}
