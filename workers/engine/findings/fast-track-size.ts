import type { FastTrack, FastTrackRow } from '../../../shared/schemas/rule-sets.ts';
import { nodeAt } from '../model-parts.ts';
import { Working } from '../working.ts';
import type { Aggregate } from './aggregates.ts';
import { kilowatts, sumAggregate } from './aggregates.ts';
import type { CircuitWay } from './circuit-miles.ts';
import { explainMiles, isMainline, traceCircuit } from './circuit-miles.ts';
import type { Generator } from './island-generation.ts';
import { listGenerators } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';

const question = 'fast-track-size';

/** A bound on the project's size, and why it is that one. */
type Bound = { limitKw: number; words: string };

/**
 * Is the project small enough for Fast Track at this voltage and place? (SGIP 2.1.)
 * Certified inverters: by the rule set's table of voltages, with more on a mainline near the substation. Machines: one size
 * anywhere. Above the table's highest voltage: never.
 */
export function answerFastTrackSize(screening: Screening): Answered[] {
  const { ruleSet, project, model, poi, upstream } = screening;
  const element = project.node;
  const reply = (verdict: Answered['verdict'], note: string) => [
    answer(screening, question, verdict, { element, note }),
  ];
  const { fastTrack } = ruleSet;
  if (!fastTrack) return reply('needs-data', 'The rule set has no table of Fast Track sizes.');
  const { proposed, totalKw } = sumProject(screening);
  if (proposed.length === 0) return reply('not-applicable', 'The project has no generator.');
  const { kv } = nodeAt(model, poi);
  if (kv > fastTrack.maximumKv) {
    return reply('outside', `${kv} kV at this place, and Fast Track ends at ${fastTrack.maximumKv} kV.`);
  }
  if (!upstream.isSource[upstream.path.at(-1)!]) {
    return reply(
      'needs-data',
      'No source feeds this place, so its distance from the substation is not known.',
    );
  }
  const way = traceCircuit(screening);
  const bounds = listBounds(fastTrack, proposed, kv, way);
  if (!bounds) return reply('needs-data', `The table of Fast Track sizes has no row for ${kv} kV.`);
  const { limitKw } = bounds.reduce((p, q) => (q.limitKw < p.limitKw ? q : p));
  const working = new Working();
  explainMiles(working, way);
  working.given(
    'P_limit',
    `Largest size at ${kv} kV: ${bounds.map(({ words }) => words).join('; ')}`,
    limitKw,
    'kW',
  );
  explainSize(working, screening);
  const judged = judge(screening, question, {
    element,
    value: totalKw,
    limit: limitKw,
    note: `${kilowatts(totalKw)} at ${kv} kV; ${bounds.map(({ words }) => words).join('; ')}. ${describeWay(way)}`,
    working: working.steps,
  });
  if (judged.verdict === 'outside') return [judged];
  const uncertified = findUncertified(proposed);
  return uncertified
    ? [{ ...answer(screening, question, 'needs-data', { element, note: uncertified }), consequence: 'study' }]
    : [judged];
}

function sumProject(screening: Screening): Aggregate {
  const generators = listGenerators(screening).filter(({ ofProject }) => ofProject);
  return sumAggregate(screening, question, generators);
}

function listBounds(
  { rows, machinesKw, mainlineMiles }: FastTrack,
  proposed: readonly Generator[],
  kv: number,
  way: CircuitWay,
): Bound[] | undefined {
  const isNear = way.miles <= mainlineMiles;
  const onMainline = isMainline(way) === true && isNear;
  const bounds: Bound[] = [];
  const row = findRow(rows, kv);
  if (proposed.some(({ unit }) => unit.kind === 'inverter')) {
    if (!row) return undefined;
    const { anywhereKw, mainlineKw } = row;
    const place = onMainline ? `on a mainline within ${mainlineMiles} miles` : 'at any place';
    const limitKw = onMainline ? mainlineKw : anywhereKw;
    bounds.push({ limitKw, words: `certified inverters up to ${kilowatts(limitKw)} ${place}` });
  }
  if (proposed.some(({ unit }) => unit.kind === 'machine')) {
    bounds.push({ limitKw: machinesKw, words: `machines up to ${kilowatts(machinesKw)} anywhere` });
  }
  return bounds;
}

/** The last row has no upper end: there the table's highest voltage holds, and counts in. */
function findRow(rows: readonly FastTrackRow[], kv: number): FastTrackRow | undefined {
  return rows.find(({ fromKv, belowKv }) => kv >= fromKv && (belowKv === null || kv < belowKv));
}

function explainSize(working: Working, screening: Screening): void {
  const { proposed, sizeOf, totalKw } = sumProject(screening);
  const of = (kind: 'inverter' | 'machine') =>
    proposed
      .filter(({ unit }) => unit.kind === kind)
      .reduce((total, generator) => total + sizeOf(generator), 0);
  const inputs = [
    working.given('P_inverters', 'Inverters of the project', of('inverter'), 'kW'),
    working.given('P_machines', 'Machines of the project', of('machine'), 'kW'),
  ];
  const words = { symbol: 'P', words: 'Size of the project', unit: 'kW' };
  working.compute(words, 'P_inverters + P_machines', inputs, totalKw);
}

function describeWay(way: CircuitWay): string {
  const distance = `The substation is ${Number(way.miles.toFixed(2))} electrical circuit miles away`;
  const mainline = isMainline(way);
  if (mainline === true) return `${distance}, all on a mainline.`;
  const { id } = way.unmarked.find((line) => line.mainline === mainline)!;
  return mainline === false
    ? `${distance}, not all on a mainline (${id}).`
    : `${distance}; whether ${id} is on a mainline is not known, so it does not count as one.`;
}

/** The table is for certified equipment; else the utility must have looked at the design (SGIP 2.1). */
function findUncertified(proposed: readonly Generator[]): string | undefined {
  const certified = ({ unit }: Generator) => {
    if (unit.kind === 'machine') return true;
    const { listed, listing } = unit.inverter;
    return listed ?? (listing?.standard === undefined ? undefined : true);
  };
  const open = proposed.find((generator) => certified(generator) !== true);
  if (!open) return undefined;
  return certified(open) === false
    ? `${open.id} is not certified: the utility has to review its design before Fast Track is open to it.`
    : `Whether ${open.id} is certified is not known, and the table of sizes is for certified inverters.`;
}
