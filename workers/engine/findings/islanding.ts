import { Working } from '../working.ts';
import type { Balance, LackingBalance } from './island-balance.ts';
import {
  describeMoment,
  explainMoment,
  findWorstBalance,
  findWorstMoment,
  joinLacking,
  listBalances,
  ratioOf,
} from './island-balance.ts';
import type { Generator } from './island-generation.ts';
import { holdsVoltage, listGenerators } from './island-generation.ts';
import { answerWithoutIslands, joinGaps } from './island-gaps.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';

const question = 'islanding';

/**
 * Can it run on as an island?
 * Nameplate of all generators over the minimum load of each island: up to the limit no balance is near enough to last. What
 * can hold voltage by itself takes a study at any size, and of the project's inverters it has to be known that they are
 * tested to stop feeding an island.
 */
export function answerIslanding(screening: Screening): Answered[] {
  if (listGenerators(screening).length === 0) {
    return [answer(screening, question, 'not-applicable', { note: 'Nothing generates here.' })];
  }
  const without = answerWithoutIslands(screening, question);
  if (without) return [without];
  const { balances, lacking } = listBalances(screening);
  const holding = [...balances, ...lacking].find(({ generators }) => generators.some(holdsVoltage));
  const worst = findWorstBalance(balances);
  const measured = worst && judgeBalance(screening, worst);
  if (holding && measured?.verdict !== 'outside') return [callForStudy(screening, holding, measured)];
  if (!measured && lacking.length === 0) {
    const none = answer(screening, question, 'not-applicable', { note: 'Nothing generates in any island.' });
    return joinGaps(screening, question, [none]);
  }
  const listed = measured?.verdict === 'within' ? holdAgainstListing(screening, measured) : measured;
  return joinGaps(screening, question, joinLacking(screening, question, listed, lacking));
}

function judgeBalance(screening: Screening, balance: Balance): Answered {
  const moment = findWorstMoment(balance);
  const working = new Working();
  const { generation, load } = explainMoment(working, balance, moment);
  working.compute(
    { symbol: 'ratio', words: 'Generation over load', unit: '' },
    `P/${load.symbol}`,
    [generation, load],
    ratioOf(moment),
  );
  const holding = balance.generators.filter(holdsVoltage);
  return judge(screening, question, {
    element: balance.island.device.id,
    value: ratioOf(moment),
    before: ratioOf(findWorstMoment(balance, false)),
    note: [
      describeMoment(balance, moment),
      ...(holding.length > 0 ? [describeHolding(holding)] : []),
      ...describeDeciding(screening.cases, balance.operating),
    ].join(' '),
    working: working.steps,
  });
}

function describeHolding(holding: readonly Generator[]): string {
  const names = holding.slice(0, 3).map(({ id }) => id);
  const more = holding.length > names.length ? ` and ${holding.length - names.length} more` : '';
  return `${names.join(', ')}${more} can hold voltage without the utility, which takes a study at any size.`;
}

/** Whatever was measured: a balance within the limit says nothing of what can hold voltage by itself. */
function callForStudy(
  screening: Screening,
  { island, generators }: Pick<Balance | LackingBalance, 'island' | 'generators'>,
  measured: Answered | undefined,
): Answered {
  const { consequence } = ruleOf(screening, question).limits[0];
  if (measured) return { ...measured, verdict: 'outside', consequence };
  const note = `With ${island.device.id} open ${describeHolding(generators.filter(holdsVoltage))}`;
  return answer(screening, question, 'outside', { element: island.device.id, note });
}

function holdAgainstListing(screening: Screening, measured: Answered): Answered {
  const inverters = screening.project.inverters ?? [];
  const refused = inverters.find(({ listing }) => listing?.antiIslanding === false);
  if (refused) {
    const { consequence } = ruleOf(screening, question).limits[0];
    const note = `${measured.note} ${refused.id} is not tested to stop feeding an island.`;
    return { ...measured, verdict: 'outside', consequence, note };
  }
  const unknown = inverters.find(({ listing }) => listing?.antiIslanding === undefined);
  if (!unknown) return measured;
  const { element, working, before } = measured;
  const note = `${measured.note} Whether ${unknown.id} is tested to stop feeding an island is not known.`;
  return answer(screening, question, 'needs-data', { element, working, before, note });
}
