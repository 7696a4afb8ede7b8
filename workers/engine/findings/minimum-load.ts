import type { Section } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import type { Aggregate } from './aggregates.ts';
import { describeAggregate, explainAggregate, kilowatts, sumAggregate } from './aggregates.ts';
import { askSections } from './ask-sections.ts';
import type { Generator } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { NestedSection } from './nested-sections.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';

const question = 'minimum-load';

/** When generation can run, from the shortest time to the longest: minimum load falls or stays as the time gets longer. */
const windows = [
  { words: '10 to 16 h (fixed photovoltaics)', loadOf: (section: Section) => section.daytimeFixedKw },
  { words: '8 to 18 h (tracking photovoltaics)', loadOf: (section: Section) => section.daytimeTrackingKw },
  { words: 'all hours', loadOf: (section: Section) => section.minimumKw },
] as const;
const allHours = windows.length - 1;

/**
 * Does all generation stay under the minimum load of each line section? (SGIP 2.4.4.1.)
 * For every section that the point of interconnection lies in, all generation beyond its device over its minimum load in
 * the hours that the generation can run: the longest hours of any generator there. Generation that the load is net of already is
 * not counted again (2.4.4.1.3). The worst of all sections and operating cases decides.
 */
export function answerMinimumLoad(screening: Screening): Answered[] {
  return askSections(screening, question, (nested, generators) =>
    judgeSection(screening, nested, generators),
  );
}

function judgeSection(
  screening: Screening,
  nested: NestedSection,
  generators: readonly Generator[],
): Answered {
  const { section } = nested;
  const lacks = (note: string) => answer(screening, question, 'needs-data', { element: section.id, note });
  const { minimumIs, netOf } = section;
  if (minimumIs === undefined) {
    return lacks('Whether its minimum load is gross or net of generation is not known.');
  }
  if (minimumIs === 'net' && netOf === undefined) {
    return lacks('Which generators its minimum load is net of is not known.');
  }
  const counted = new Set(minimumIs === 'net' ? netOf : []);
  const added = counted.size === 0 ? generators : generators.filter(({ id }) => !counted.has(id));
  const aggregate = sumAggregate(screening, question, added);
  const window = added.reduce((longest, each) => Math.max(longest, windowOf(each)), 0);
  const load = findLoad(section, window);
  if (!load) return lacks(`Its minimum load over ${windows[window]!.words} is not known.`);
  if (load.kw === 0) {
    const note = `${describeAggregate(aggregate)}, and no load at all at times.`;
    return answer(screening, question, 'outside', { element: section.id, note });
  }
  const judged = judgeLoad(screening, nested, aggregate, load);
  // Over a minimum of longer hours than are asked for: at those that are asked for there may be more load.
  if (judged.verdict === 'within' || load.isExact) return judged;
  return lacks(
    `Its minimum load over ${windows[window]!.words} is not known, and generation is more than that over ${load.words}.`,
  );
}

/** The hours in which a generator can run; what is not known counts as the longer. */
function windowOf({ unit }: Generator): number {
  if (unit.kind === 'machine') return allHours;
  const { energy, storage, tracking } = unit.inverter;
  if (energy !== 'photovoltaic' || storage) return allHours;
  return tracking === false ? 0 : 1;
}

type FoundLoad = { kw: number; words: string; isExact: boolean };

/** The minimum over the hours, or over the next longer ones that are known: it is no larger. */
function findLoad(section: Section, window: number): FoundLoad | undefined {
  for (let longer = window; longer < windows.length; longer++) {
    const { loadOf, words } = windows[longer]!;
    const kw = loadOf(section);
    if (kw !== undefined) return { kw, words, isExact: longer === window };
  }
  return undefined;
}

function judgeLoad(
  screening: Screening,
  { section, operating }: NestedSection,
  aggregate: Aggregate,
  { kw, words }: FoundLoad,
): Answered {
  const working = new Working();
  const netOf = section.minimumIs === 'net' ? (section.netOf ?? []) : [];
  const net = netOf.length > 0 ? `, net of ${netOf.join(', ')}` : '';
  const total = explainAggregate(working, aggregate, ` beyond ${section.device}`);
  const load = working.given('L_min', `Minimum load of section ${section.id} over ${words}${net}`, kw, 'kW');
  const share = { symbol: 's', words: 'Generation over minimum load', unit: '%' };
  const value = (aggregate.totalKw * 100) / kw;
  working.compute(share, 'P * 100 / L_min', [total, load], value);
  const notes = [
    `${describeAggregate(aggregate)}, against a minimum of ${kilowatts(kw)} over ${words}${net}.`,
    ...describeDeciding(screening.cases, operating),
  ];
  return judge(screening, question, {
    element: section.id,
    value,
    before: (aggregate.connectedKw * 100) / kw,
    note: notes.join(' '),
    working: working.steps,
  });
}
