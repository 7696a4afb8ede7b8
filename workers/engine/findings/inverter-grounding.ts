import { listGenerators } from './island-generation.ts';
import type { InverterCase } from './inverter-cases.ts';
import { listInverterCases } from './inverter-cases.ts';
import { explainInverterCase } from './inverter-working.ts';
import { kilowatts } from './island-balance.ts';
import { answerWithoutIslands, joinGaps } from './island-gaps.ts';
import { listIslands } from './islands.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';

const question = 'inverter-grounding';

/**
 * Do healthy phases stay in bounds when inverters alone feed a ground fault?
 * In every island that has inverters, by the method of IEEE C62.92.6 (see inverter-island.ts): the highest voltage of a healthy phase
 * at the point of interconnection, in percent of nominal. Machines and ground sources of others are in or out, whichever is
 * worse; with and without each bank is shown, since a bank can make it worse.
 */
export function answerInverterGrounding(screening: Screening): Answered[] {
  if (!listGenerators(screening).some(({ unit }) => unit.kind === 'inverter')) {
    return [answer(screening, question, 'not-applicable', { note: 'There are no inverters.' })];
  }
  const without = answerWithoutIslands(screening, question);
  if (without) return [without];
  const found = listIslands(screening).map((ofCase) => listInverterCases(screening, ofCase, true));
  const cases = found.flatMap((each) => each.cases);
  const lacking = new Map(
    found.flatMap((each) => each.lacking.map(({ island, lacking: note }) => [island.device.id, note])),
  );
  const worst = findWorst(cases);
  if (!worst && lacking.size === 0) {
    const note = 'No inverter stays behind in any island that has more than one phase.';
    return joinGaps(screening, question, [answer(screening, question, 'not-applicable', { note })]);
  }
  const measured = worst && judgeCase(screening, worst, cases);
  if (measured?.verdict === 'outside') lacking.delete(measured.element!);
  return joinGaps(screening, question, [
    ...(measured && !lacking.has(measured.element!) ? [measured] : []),
    ...[...lacking].map(([element, note]) => answer(screening, question, 'needs-data', { element, note })),
  ]);
}

/** The first of equals, so that the device nearest the source is named. */
function findWorst(cases: readonly InverterCase[]): InverterCase | undefined {
  const deciding = cases.filter(({ decides }) => decides);
  const highest = Math.max(...deciding.map(({ voltages }) => voltages.highest));
  return deciding.find(({ voltages }) => voltages.highest >= highest * (1 - 1e-9));
}

function judgeCase(screening: Screening, worst: InverterCase, cases: readonly InverterCase[]): Answered {
  const before = findWorst(
    listIslands(screening).flatMap((ofCase) => listInverterCases(screening, ofCase, false).cases),
  );
  return judge(screening, question, {
    element: worst.island.device.id,
    value: worst.voltages.highest * 100,
    ...(before ? { before: before.voltages.highest * 100 } : {}),
    note: describe(screening, worst, cases),
    working: explainInverterCase(screening, worst),
  });
}

function describe(screening: Screening, worst: InverterCase, cases: readonly InverterCase[]): string {
  const { island, words, moment, given } = worst;
  const share = Number((given.groundedShare * 100).toFixed(1));
  return [
    `Worst with ${island.device.id} open${words && `, ${words}`}:`,
    `${kilowatts(moment.generationKw)} of inverters against ${kilowatts(moment.loadKw)} of load, ${share} % of it grounded${given.holding ? ', beside what holds voltage there' : ''}.`,
    ...compareBanks(worst, cases),
    ...describeDeciding(screening.cases, worst.operating),
  ].join(' ');
}

/** What each bank does in the island that decides: the highest voltage with it and without it. */
function compareBanks(worst: InverterCase, cases: readonly InverterCase[]): string[] {
  const alike = cases.filter(
    ({ operating, island, machines }) =>
      operating === worst.operating && island === worst.island && machines === worst.machines,
  );
  const highestOf = (bank: string | undefined) => {
    const chosen = alike.filter(({ bankOut, allIn }) => (bank === undefined ? allIn : bankOut === bank));
    return Math.max(...chosen.map(({ voltages }) => voltages.highest * 100));
  };
  const banks = new Set(alike.flatMap(({ bankOut }) => bankOut ?? []));
  return [...banks].map((bank) => {
    const [with_, out] = [highestOf(undefined), highestOf(bank)];
    const effect = with_ > out ? ': it makes this worse' : '';
    return `With bank ${bank} ${with_.toFixed(1)} %, without it ${out.toFixed(1)} %${effect}.`;
  });
}
