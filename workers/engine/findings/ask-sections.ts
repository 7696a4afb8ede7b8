import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import type { Generator } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { NestedSection } from './nested-sections.ts';
import { listNestedSections } from './nested-sections.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/**
 * Puts a question to every line section that the point of interconnection lies in, in every operating case. The largest
 * value decides; each section with a gap in its records, each with a way round its device is a finding of its own, and so are
 * devices that bound sections of which the records say nothing.
 */
export function askSections(
  screening: Screening,
  id: QuestionId,
  ask: (nested: NestedSection, generators: readonly Generator[]) => Answered,
): Answered[] {
  const { sections, unlisted, without } = listNestedSections(screening);
  const bySection = new Map<string, Answered>();
  const looped = new Set<string>();
  for (const nested of sections) {
    const { generators } = nested;
    const section = nested.section.id;
    if (looped.has(section)) continue;
    if (!generators) looped.add(section);
    const answered = generators ? ask(nested, generators) : answerLoop(screening, id, nested);
    const before = bySection.get(section);
    if (!before || !generators || isWorse(answered, before)) bySection.set(section, answered);
  }
  const answers = [...bySection.values()];
  const measured = answers.filter(({ value }) => value !== null);
  const worst = measured.reduce<Answered | undefined>((p, q) => (p && !isWorse(q, p) ? p : q), undefined);
  return [
    ...(worst ? [worst] : []),
    ...answers.filter(({ value }) => value === null),
    ...answerUnlisted(screening, id, unlisted),
    ...(without.length > 0 && unlisted.length === 0 ? [answerWithout(screening, id, without)] : []),
  ];
}

/** What is outside counts before a gap, and a gap before what is within; of measured values the larger, of equals the first. */
function isWorse(one: Answered, other: Answered): boolean {
  const rank = ({ verdict }: Answered) => ['within', 'needs-data', 'outside'].indexOf(verdict);
  if (rank(one) !== rank(other)) return rank(one) > rank(other);
  return one.value !== null && one.value > (other.value ?? Infinity) * (1 + 1e-9);
}

/** A closed tie is no gap in the records: whatever the rule says of those, this takes a study. */
function answerLoop(screening: Screening, id: QuestionId, { section, operating }: NestedSection): Answered {
  const { name } = operating;
  const when = name === undefined ? '' : ` in operating case ${JSON.stringify(name)}`;
  const note = `The section has another way to a source${when}, so its device ${section.device} does not bound it.`;
  return {
    ...answer(screening, id, 'needs-data', { element: section.id, note }),
    consequence: 'study',
  };
}

/** More names than that say nothing more to a reader. */
const mostNamed = 6;

/** Needs data where devices on the way bound sections of which the records say nothing. */
export function answerUnlisted(
  screening: Screening,
  id: QuestionId,
  unlisted: readonly Device[],
): Answered[] {
  if (unlisted.length === 0) return [];
  const names = unlisted.slice(0, mostNamed).map((device) => device.id);
  const more = unlisted.length > mostNamed ? ` and ${unlisted.length - mostNamed} more` : '';
  const note = `The records say nothing of the line sections beyond ${names.join(', ')}${more}.`;
  return [answer(screening, id, 'needs-data', { element: unlisted[0]!.id, note })];
}

function answerWithout(screening: Screening, id: QuestionId, without: readonly OperatingCase[]): Answered {
  const place =
    'No line section with a known device lies between the source and the point of interconnection';
  const names = without.flatMap(({ name }) => (name === undefined ? [] : [JSON.stringify(name)]));
  const isInAll = without.length === screening.cases.length || names.length === 0;
  const note = isInAll ? `${place}.` : `${place} in operating case ${names.join(', ')}.`;
  return answer(screening, id, 'needs-data', { note });
}
