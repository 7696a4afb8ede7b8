import { Working } from '../working.ts';
import { describeAggregate, explainAggregate, kilowatts, sumAggregate } from './aggregates.ts';
import { askSections } from './ask-sections.ts';
import type { Generator } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { NestedSection } from './nested-sections.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';

const question = 'section-peak-load';

/**
 * Is all generation small against the peak load of each line section? (SGIP 2.2.1.2.)
 * For every section that the point of interconnection lies in, all generation beyond its device over its peak load; the
 * worst of all sections and operating cases decides, and each section without a known peak is a finding of its own.
 */
export function answerSectionPeakLoad(screening: Screening): Answered[] {
  return askSections(screening, question, (nested, generators) =>
    judgeSection(screening, nested, generators),
  );
}

function judgeSection(
  screening: Screening,
  { section, operating }: NestedSection,
  generators: readonly Generator[],
): Answered {
  const { id: element, device, peakKw } = section;
  if (!peakKw) {
    return answer(screening, question, 'needs-data', { element, note: 'Its peak load is not known.' });
  }
  const aggregate = sumAggregate(screening, question, generators);
  const working = new Working();
  const total = explainAggregate(working, aggregate, ` beyond ${device}`);
  const peak = working.given('P_peak', `Peak load of section ${element}`, peakKw, 'kW');
  const share = { symbol: 's', words: 'Generation over peak load', unit: '%' };
  const value = (aggregate.totalKw * 100) / peakKw;
  working.compute(share, 'P * 100 / P_peak', [total, peak], value);
  const notes = [
    `${describeAggregate(aggregate)}, against a peak of ${kilowatts(peakKw)}.`,
    ...describeDeciding(screening.cases, operating),
  ];
  return judge(screening, question, {
    element,
    value,
    before: (aggregate.connectedKw * 100) / peakKw,
    note: notes.join(' '),
    working: working.steps,
  });
}
