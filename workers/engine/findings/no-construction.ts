import type { QuestionId } from '../../../shared/schemas/findings.ts';
import { questions } from '../../../shared/schemas/findings.ts';
import type { Project } from '../../../shared/schemas/study.ts';
import { panelElement } from './interrupting-duty.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { AnswerOf } from './questions.ts';
import type { Screening } from './screening.ts';

const question = 'no-construction';

/** Questions that, answered badly, are mended by work on the utility's own system. */
const facilities: [QuestionId, string][] = [
  ['interrupting-duty', 'equipment of a higher rating'],
  ['high-side-float', 'ground-fault protection on the high side'],
  ['steady-voltage', 'voltage regulation or larger conductors'],
  ['rapid-voltage-change', 'a stronger connection'],
  ['ground-reach', 'other ground protection'],
  ['phase-reach', 'other phase protection'],
  ['sympathetic-trip', 'directional protection'],
  ['reclosing', 'voltage supervision of reclosing'],
  ['reverse-flow', 'larger conductors or transformers, or other regulator controls'],
  ['service', 'a larger service transformer or drop'],
];

/**
 * Can it connect without new utility facilities? (SGIP 2.2.1.10.)
 * It follows from the other answers, which are listed, and from the distance to a place with the phases that the project
 * needs: a line of the project's own is one that has to be built.
 */
export function answerNoConstruction(screening: Screening, answerOf: AnswerOf): Answered[] {
  const { project } = screening;
  const found = facilities.flatMap(([id, words]) =>
    answerOf(id).map((answered) => ({ id, words, answered })),
  );
  const own = listOwnIds(project);
  const needed = found
    .filter(({ answered }) => answered.verdict === 'outside' && answered.consequence !== 'note')
    .filter(({ answered }) => !own.has(answered.element))
    .map(({ words, answered }) => `${words}${answered.element ? ` (${answered.element})` : ''}`);
  for (const { id, km, from } of project.lines ?? []) {
    needed.push(
      `a line of ${Number(km.toFixed(3))} km (${id}), for the nearest place with its phases is ${from}`,
    );
  }
  const open = new Set(found.filter(({ answered }) => answered.verdict === 'needs-data').map(({ id }) => id));
  const unknown = [...open].map((id) => questions.find((each) => each.id === id)!.question);
  const notes = [
    ...(needed.length > 0 ? [`Other answers call for: ${[...new Set(needed)].join('; ')}.`] : []),
    ...(unknown.length > 0 ? [`Not known until these are answered: ${unknown.join(' ')}`] : []),
  ];
  const reply = (verdict: Answered['verdict']) => [
    answer(screening, question, verdict, {
      element: project.node,
      note:
        notes.join(' ') || 'No other answer calls for work on the utility system, and its phases are here.',
    }),
  ];
  if (needed.length > 0) return reply('outside');
  return reply(unknown.length > 0 ? 'needs-data' : 'within');
}

/** What the project brings is the customer's to replace. */
function listOwnIds(project: Project): ReadonlySet<string | undefined> {
  const { devices = [], transformers = [] } = project;
  const panels = transformers.map(({ id }) => panelElement(project, id));
  return new Set([...[...devices, ...transformers].map(({ id }) => id), ...panels]);
}
