import { Working } from '../working.ts';
import type { Balance } from './island-balance.ts';
import {
  describeMoment,
  explainMoment,
  findWorstBalance,
  findWorstMoment,
  joinLacking,
  listBalances,
  ratioOf,
} from './island-balance.ts';
import { listGenerators } from './island-generation.ts';
import { answerWithoutIslands, joinGaps } from './island-gaps.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';

const question = 'load-rejection';

/**
 * How high can the voltage go when the load is cut off?
 * The current of all generators, at nameplate, into the resistance of the island's minimum load: V = P/L of nominal. Where every
 * generator there has a load-rejection test behind it, the voltage is no higher than the highest of the tests.
 */
export function answerLoadRejection(screening: Screening): Answered[] {
  if (listGenerators(screening).length === 0) {
    return [answer(screening, question, 'not-applicable', { note: 'Nothing generates here.' })];
  }
  const without = answerWithoutIslands(screening, question);
  if (without) return [without];
  const { balances, lacking } = listBalances(screening);
  const isTested = ({ generators }: Pick<Balance, 'generators'>) => findTested(generators) !== undefined;
  const tested = lacking.filter(isTested).map((each) => judgeTested(screening, each));
  const worst = findWorstVoltage(balances);
  const measured = [...(worst ? [judgeBalance(screening, worst)] : []), ...tested].sort(
    (p, q) => q.value! - p.value!,
  );
  const unknown = lacking.filter((each) => !isTested(each));
  if (measured.length === 0 && unknown.length === 0) {
    const none = answer(screening, question, 'not-applicable', { note: 'Nothing generates in any island.' });
    return joinGaps(screening, question, [none]);
  }
  return joinGaps(screening, question, joinLacking(screening, question, measured[0], unknown));
}

/** The highest voltage in the load-rejection tests of all, in percent; nothing where one has none. */
function findTested(generators: Balance['generators']): number | undefined {
  const tests = generators.map(({ unit }) => {
    const { listing } = unit.kind === 'machine' ? unit.machine : unit.inverter;
    return listing?.loadRejectionPercent;
  });
  return tests.every((test) => test !== undefined) ? Math.max(...tests) : undefined;
}

function voltageOf(balance: Balance): number {
  const percent = ratioOf(findWorstMoment(balance)) * 100;
  return Math.min(percent, findTested(balance.generators) ?? Infinity);
}

/** Where tests bound several alike, the one with most generation for its load. */
function findWorstVoltage(balances: readonly Balance[]): Balance | undefined {
  const highest = Math.max(...balances.map(voltageOf));
  return findWorstBalance(balances.filter((each) => voltageOf(each) >= highest * (1 - 1e-9)));
}

function judgeBalance(screening: Screening, balance: Balance): Answered {
  const moment = findWorstMoment(balance);
  const tested = findTested(balance.generators);
  const working = new Working();
  const { generation, load } = explainMoment(working, balance, moment);
  const constant = ratioOf(moment) * 100;
  const current = working.compute(
    {
      symbol: 'V_I',
      words: 'Voltage of that current in the resistance of the load, over nominal',
      unit: '%',
    },
    `P/${load.symbol}*100`,
    [generation, load],
    constant,
  );
  const notes = [describeMoment(balance, moment)];
  if (tested !== undefined) {
    const test = working.given(
      'V_test',
      'Highest voltage in the load-rejection tests of all of them',
      tested,
      '%',
    );
    const words = 'The lower of the two: each is a bound';
    working.compute(
      { symbol: 'V', words, unit: '%' },
      'min(V_I, V_test)',
      [current, test],
      Math.min(constant, tested),
    );
    if (tested < constant)
      notes.push(`All generators are tested for load rejection, to at most ${tested} %.`);
  }
  return judge(screening, question, {
    element: balance.island.device.id,
    value: voltageOf(balance),
    before: ratioOf(findWorstMoment(balance, false)) * 100,
    note: [...notes, ...describeDeciding(screening.cases, balance.operating)].join(' '),
    working: working.steps,
  });
}

/** An island whose load is not known, but all generators of which have a test. */
function judgeTested(
  screening: Screening,
  { island, generators }: Pick<Balance, 'island' | 'generators'>,
): Answered {
  const tested = findTested(generators)!;
  const working = new Working();
  working.given('V', 'Highest voltage in the load-rejection tests of all generators', tested, '%');
  const note = `With ${island.device.id} open all generators are tested for load rejection, to at most ${tested} %; the load there is not known.`;
  return judge(screening, question, {
    element: island.device.id,
    value: tested,
    note,
    working: working.steps,
  });
}
