import type { Section } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import { answerUnlisted } from './ask-sections.ts';
import { explainMiles, isMainline, traceCircuit } from './circuit-miles.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { listNestedSections } from './nested-sections.ts';
import { numberParameter } from './parameters.ts';
import type { Screening } from './screening.ts';

const question = 'safety-reliability';

/**
 * Does nothing about the line section call for the study process? (SGIP 2.4.4.3.)
 * The distance from the substation in electrical circuit miles, along a mainline; and of every line section that the point of
 * interconnection lies in whether load is uniform, one customer's share of it, and transfers.
 */
export function answerSafetyReliability(screening: Screening): Answered[] {
  const { sections, unlisted } = listNestedSections(screening);
  const bySection = new Map(sections.map(({ section }) => [section.id, section]));
  const answers = [...bySection.values()].flatMap((section) => askSection(screening, section));
  const gaps = answerUnlisted(screening, question, unlisted);
  if (bySection.size === 0 && gaps.length === 0) {
    const note =
      'No line section with a known device lies between the source and the point of interconnection.';
    gaps.push(answer(screening, question, 'needs-data', { note }));
  }
  return [judgeDistance(screening, [...bySection.keys()]), ...answers, ...gaps];
}

function judgeDistance(screening: Screening, sections: readonly string[]): Answered {
  const { upstream, project } = screening;
  const element = project.node;
  if (!upstream.isSource[upstream.path.at(-1)!]) {
    const note = 'No source feeds this place, so its distance from the substation is not known.';
    return answer(screening, question, 'needs-data', { element, note });
  }
  const way = traceCircuit(screening);
  const working = new Working();
  explainMiles(working, way);
  const judged = judge(screening, question, {
    element,
    value: way.miles,
    note: `${Number(way.miles.toFixed(3))} electrical circuit miles from the substation; line sections looked at: ${sections.join(', ') || 'none'}.`,
    working: working.steps,
  });
  const mainline = isMainline(way);
  if (judged.verdict === 'outside' || mainline === true) return judged;
  const { id } = way.unmarked.find((line) => line.mainline === mainline)!;
  return mainline === false
    ? answer(screening, question, 'outside', { element, note: `Line ${id} on the way is no mainline.` })
    : answer(screening, question, 'needs-data', {
        element,
        note: `Whether line ${id} on the way is a mainline is not known.`,
      });
}

/** Nothing where all is as it should be. */
function askSection(screening: Screening, section: Section): Answered[] {
  const most = numberParameter(screening, question, 'largestCustomerSharePercent') ?? 100;
  const { id: element, uniform, largestCustomerShare: share, transfers } = section;
  const troubles = [
    ...(uniform === false ? ['its load is not uniform'] : []),
    ...(share !== undefined && share * 100 > most
      ? [`one customer is ${Number((share * 100).toFixed(2))} % of its load, over ${most} %`]
      : []),
    ...(transfers === true ? ['it is fed from elsewhere at times, or feeds others'] : []),
  ];
  const missing = [
    ...(uniform === undefined ? ['whether its load is uniform'] : []),
    ...(share === undefined ? ["its largest customer's share"] : []),
    ...(transfers === undefined ? ['whether it is transferred at times'] : []),
  ];
  if (troubles.length === 0 && missing.length === 0) return [];
  const unknown = missing.length > 0 ? [`Not known: ${missing.join(', ')}.`] : [];
  const notes =
    troubles.length > 0 ? [`Of section ${element}: ${troubles.join('; ')}.`, ...unknown] : unknown;
  const verdict = troubles.length > 0 ? 'outside' : 'needs-data';
  return [answer(screening, question, verdict, { element, note: notes.join(' ') })];
}
