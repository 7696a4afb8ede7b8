import type { SecondaryNetwork } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import type { Aggregate } from './aggregates.ts';
import { describeAggregate, explainAggregate, kilowatts, sumAggregate } from './aggregates.ts';
import { listGenerators } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import { numberParameter } from './parameters.ts';
import type { Screening } from './screening.ts';
import { findServedArea } from './upstream.ts';

const question = 'spot-network';

/**
 * On a spot network: inverters only, and small against its load? (SGIP 2.2.1.3.)
 * All generation on the network against the smaller of the rule's kW and its `sharePercent` of the network's peak load. An
 * area network takes a study whatever the size.
 */
export function answerSpotNetwork(screening: Screening): Answered[] {
  const { study, project } = screening;
  const networks = (study.feeder.secondaryNetworks ?? []).map((network) => {
    return { network, area: coverNetwork(screening, network) };
  });
  const found = networks.find(({ area }) => area.has(screening.poi));
  if (!found) {
    const note = 'The point of interconnection is on none of the secondary networks of the model.';
    return [answer(screening, question, 'not-applicable', { note })];
  }
  const { network, area } = found;
  const element = network.id;
  if (network.kind === 'area') {
    const note = 'An area network: what generates on it is for a study, however small.';
    return [{ ...answer(screening, question, 'outside', { element, note }), consequence: 'study' }];
  }
  if ((project.machines ?? []).length > 0) {
    const note = 'The project has a rotating machine, and a spot network takes inverters only.';
    return [answer(screening, question, 'outside', { element, note })];
  }
  const generators = listGenerators(screening).filter(({ node, ofProject }) => ofProject || area.has(node));
  const aggregate = sumAggregate(screening, question, generators);
  return [judgeNetwork(screening, network, aggregate)];
}

/** Nodes that the network serves: its own, what closed switches join to them, and what is stepped down from there. */
function coverNetwork({ model, upstream }: Screening, { nodes }: SecondaryNetwork): Set<number> {
  const covered = new Set<number>();
  for (const id of nodes) {
    const node = model.nodeIndex.get(id)!;
    if (covered.has(node)) continue;
    findServedArea(upstream, model, node).forEach((isServed, index) => isServed && covered.add(index));
  }
  return covered;
}

function judgeNetwork(
  screening: Screening,
  { id, peakKw }: SecondaryNetwork,
  aggregate: Aggregate,
): Answered {
  const cap = ruleOf(screening, question).limits[0].limit;
  const sharePercent = numberParameter(screening, question, 'sharePercent');
  const working = new Working();
  const limits = [
    ...(cap === null ? [] : [working.given('P_cap', 'Limit in any case, from the rule set', cap, 'kW')]),
    ...explainShare(working, peakKw, sharePercent, id),
  ];
  const limit = Math.min(...limits.map(({ value }) => value as number));
  const isOver = aggregate.totalKw > limit;
  if (limits.length < 2 && sharePercent !== undefined && !isOver) {
    const note = `${describeAggregate(aggregate)}; the peak load of the network is not known.`;
    return answer(screening, question, 'needs-data', { element: id, note });
  }
  if (limits.length > 1) {
    const words = { symbol: 'P_limit', words: 'The smaller of the two', unit: 'kW' };
    working.compute(words, `min(${limits.map(({ symbol }) => symbol).join(', ')})`, limits, limit);
  }
  explainAggregate(working, aggregate, ` on network ${id}`);
  return judge(screening, question, {
    element: id,
    value: aggregate.totalKw,
    before: aggregate.connectedKw,
    limit,
    note: `${describeAggregate(aggregate)}, against ${kilowatts(limit)}.`,
    working: working.steps,
  });
}

function explainShare(
  working: Working,
  peakKw: number | undefined,
  sharePercent: number | undefined,
  id: string,
) {
  if (peakKw === undefined || sharePercent === undefined) return [];
  const share = working.given('s', 'Share of the peak load, from the rule set', sharePercent, '%');
  const peak = working.given('P_peak', `Peak load of network ${id}`, peakKw, 'kW');
  const words = { symbol: 'P_share', words: 'That share of the peak load', unit: 'kW' };
  return [working.compute(words, 's * P_peak / 100', [share, peak], (sharePercent * peakKw) / 100)];
}
