import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { AnswerOf } from './questions.ts';
import type { Screening } from './screening.ts';

const question = 'voltage-quality';

/** The questions that this one rests on, and what each tells of voltage. */
const parts = [
  ['steady-voltage', 'regulation'],
  ['rapid-voltage-change', 'fluctuation'],
  ['listing', 'harmonics'],
] as const satisfies [QuestionId, string][];

/**
 * Does voltage stay regulated, steady and clean with all generation? (SGIP 2.4.4.2.)
 * It follows from the answers on steady voltage, rapid voltage change and listing; what is not asked is not known.
 */
export function answerVoltageQuality(screening: Screening, answerOf: AnswerOf): Answered[] {
  const states = parts.map(([id, words]) => ({ words, verdict: joinVerdicts(answerOf(id)) }));
  const named = (verdict: string) =>
    states.filter((state) => state.verdict === verdict).map(({ words }) => words);
  const [outside, missing, unasked] = [named('outside'), named('needs-data'), named('not asked')];
  const notes = [
    ...(outside.length > 0 ? [`Outside: ${outside.join(', ')}.`] : []),
    ...(missing.length > 0 ? [`Not known: ${missing.join(', ')}.`] : []),
    ...(unasked.length > 0 ? [`Not asked by these rules, so not known: ${unasked.join(', ')}.`] : []),
  ];
  const element = screening.project.node;
  if (outside.length > 0) {
    return [answer(screening, question, 'outside', { element, note: notes.join(' ') })];
  }
  if (notes.length > 0) {
    return [answer(screening, question, 'needs-data', { element, note: notes.join(' ') })];
  }
  const [within, noted] = [named('within'), named('noted')];
  const kept =
    within.length > 0
      ? [`${within.join(', ')}: ${within.length > 1 ? 'each ' : ''}within its own limit.`]
      : [];
  const beyond =
    noted.length > 0 ? [`${noted.join(', ')}: outside, but no more than a note follows from it.`] : [];
  const note = [...kept, ...beyond].map((each) => each.charAt(0).toUpperCase() + each.slice(1)).join(' ');
  return [answer(screening, question, 'within', { element, note })];
}

/** The gravest of several answers; one from which no more than a note follows is not against it, and is told as such. */
function joinVerdicts(answers: readonly Answered[]): Answered['verdict'] | 'not asked' | 'noted' {
  if (answers.length === 0) return 'not asked';
  const has = (verdict: Answered['verdict']) => answers.some((each) => each.verdict === verdict);
  if (answers.some(({ verdict, consequence }) => verdict === 'outside' && consequence !== 'note')) {
    return 'outside';
  }
  if (has('needs-data')) return 'needs-data';
  return has('outside') ? 'noted' : 'within';
}
