import { allPhases } from '../case.ts';
import { magnitude, sum } from '../complex.ts';
import type { Fault } from '../faults.ts';
import { largestPhase, listBoltedFaults } from '../faults.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { baseAmps } from '../per-unit.ts';
import type { BranchCurrent } from '../protection/branch-currents.ts';
import { branchCurrentFor, findBranchShares } from '../protection/branch-currents.ts';
import type { Zone } from '../protection/zones.ts';
import { findFaultPoint, solveCase } from '../solve-case.ts';
import type { SolvedCase } from '../solve-case.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import { pickupOf, zonesIn } from './reach.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';
import { withoutResidue } from './residue.ts';
import { workReverse } from './reverse-working.ts';
import { describeWeakest } from './weakest-source.ts';

const id = 'sympathetic-trip';

/** What a breaker carries back towards its bus for one fault there or next door, over its pickup. */
export type Reverse = {
  readonly zone: Zone;
  readonly kind: 'phase' | 'ground';
  readonly node: number;
  readonly fault: Fault;
  readonly current: BranchCurrent;
  readonly amps: number;
  readonly multiple: number;
  readonly operating: OperatingCase;
  readonly source: 'strongest' | 'weakest';
};

const faultWords = {
  threePhase: 'three-phase',
  lineGround: 'line-to-ground',
  lineLine: 'line-to-line',
  lineLineGround: 'two-lines-to-ground',
} as const;

/**
 * Could a healthy feeder trip for a fault next door?
 * The largest phase current and the residual 3I0 that generation on the project's feeder sends back through its breaker, over the
 * pickups, for bolted faults on the bus and outwards on the feeders beside it, all generation on, with the strongest and
 * with the weakest source. A breaker that trips for current out of the substation alone does not see it.
 */
export function answerSympatheticTrip(screening: Screening): Answered[] {
  const breakers = screening.cases.map((operating) => findFeederBreaker(screening, operating));
  const known = breakers.find((zone) => zone !== undefined);
  if (!known) {
    const note = 'No breaker is known between the sources and the point of interconnection.';
    return [answer(screening, id, 'needs-data', { note })];
  }
  if (breakers.every((zone) => !zone || zone.device.directional)) {
    const note =
      'It trips only for current that leaves the substation, so that current the other way cannot trip it.';
    return [answer(screening, id, 'not-applicable', { element: known.device.id, note })];
  }
  const missing = listMissing(screening, breakers);
  const measure = (state: 'before' | 'after') =>
    screening.cases.flatMap((operating, place) => {
      const zone = breakers[place];
      return zone && !zone.device.directional ? measureIn(screening, operating, zone, state) : [];
    });
  const after = measure('after');
  if (after.length === 0) return missing;
  const before = measure('before');
  const judged = (['phase', 'ground'] as const)
    .flatMap((kind) => judgeKind(screening, ofKind(after, kind), ofKind(before, kind)))
    .sort((p, q) => q.value! - p.value!);
  // Of the two the worse decides; the other is said where it is outside too.
  return [...judged.filter(({ verdict }, place) => place === 0 || verdict !== 'within'), ...missing];
}

const ofKind = (measured: readonly Reverse[], wanted: Reverse['kind']) =>
  measured.filter(({ kind }) => kind === wanted);

function judgeKind(screening: Screening, after: readonly Reverse[], before: readonly Reverse[]): Answered[] {
  if (after.length === 0) return [];
  const worst = after.reduce((p, q) => (q.multiple > p.multiple * (1 + 1e-9) ? q : p));
  const what = worst.kind === 'phase' ? 'in a phase' : 'of 3I0';
  const notes = [
    `${worst.amps.toFixed(0)} A ${what} back through ${worst.zone.device.id} against a ${worst.kind} pickup of ` +
      `${pickupOf(worst.zone.device, worst.kind)} A, for a ${faultWords[worst.fault.kind as keyof typeof faultWords]} fault at ` +
      `${nodeAt(screening.model, worst.node).id}, ${worst.source} source.`,
    ...(worst.source === 'weakest' ? describeWeakest(screening) : []),
    ...describeDeciding(screening.cases, worst.operating),
  ];
  return [
    judge(screening, id, {
      element: `${worst.zone.device.id}, ${worst.kind}`,
      value: worst.multiple,
      before: before.length > 0 ? Math.max(...before.map(({ multiple }) => multiple)) : null,
      note: notes.join(' '),
      working: workReverse(screening, worst),
    }),
  ];
}

/** The outermost device on the project's way that stands on a line: on a transformer it is the bank's, not a feeder's. */
function findFeederBreaker(screening: Screening, operating: OperatingCase): Zone | undefined {
  const { model } = screening;
  const { zones } = zonesIn(screening, operating, ruleOf(screening, id));
  const onPath = zones.filter(({ branch }) => operating.upstream.branches.includes(branch));
  const onLine = onPath.find(({ branch }) => {
    const { from, to, clockHour } = branchAt(model, branch);
    return nodeAt(model, from).kv === nodeAt(model, to).kv && clockHour === 0;
  });
  return onLine ?? onPath[0];
}

function listMissing(screening: Screening, breakers: readonly (Zone | undefined)[]): Answered[] {
  const missing = new Map<string, string[]>();
  for (const zone of breakers) {
    if (!zone || zone.device.directional) continue;
    const kinds = (['phase', 'ground'] as const).filter((kind) => pickupOf(zone.device, kind) === undefined);
    const notes = kinds.length > 0 ? [`Its ${kinds.join(' and its ')} pickup is not known.`] : [];
    if (lacksGroundSource(screening)) {
      notes.push('A source gives no zero-sequence impedance, so that 3I0 is not known.');
    }
    if (notes.length > 0) missing.set(zone.device.id, notes);
  }
  return [...missing].map(([element, notes]) =>
    answer(screening, id, 'needs-data', { element, note: notes.join(' ') }),
  );
}

function measureIn(
  screening: Screening,
  operating: OperatingCase,
  zone: Zone,
  state: 'before' | 'after',
): Reverse[] {
  const { model, poi } = screening;
  const { kv } = nodeAt(model, poi);
  const weakest: SolvedCase['choice'] = {
    ...operating.solver.solve('minimum', kv).choice,
    machines: 'all',
    inverters: 'all',
    project: state === 'after',
  };
  const kinds = (['phase', 'ground'] as const).filter((kind) => {
    return pickupOf(zone.device, kind) !== undefined && !(kind === 'ground' && lacksGroundSource(screening));
  });
  const cases = [
    { source: 'strongest', solved: operating.solver.solve(state, kv) },
    { source: 'weakest', solved: solveCase(model, weakest) },
  ] as const;
  return cases.flatMap(({ source, solved }) => {
    const findLargest = makeReverseFinder(solved, zone);
    return kinds.flatMap((kind) => {
      const largest = walkBehind(operating, zone, solved, (node) => findLargest(node, kind));
      if (!largest) return [];
      const multiple = largest.amps / pickupOf(zone.device, kind)!;
      return [{ ...largest, zone, kind, multiple, operating, source }];
    });
  });
}

type Measured = Pick<Reverse, 'node' | 'fault' | 'current' | 'amps'>;

function makeReverseFinder(solved: SolvedCase, zone: Zone) {
  const shares = findBranchShares(solved, zone.branch, zone.end);
  const base = baseAmps(solved.model.baseMva, nodeAt(solved.model, zone.node).kv);
  return (node: number, kind: 'phase' | 'ground'): Measured | undefined => {
    const point = findFaultPoint(solved, node);
    let most: Measured | undefined;
    for (const fault of point ? listBoltedFaults(point) : []) {
      const current = branchCurrentFor(solved, shares, node, fault);
      const all = kind === 'phase' ? largestPhase(current) : magnitude(sum(...current.currents));
      const size = withoutResidue(all, largestPhase(fault));
      if (!most || size * base > most.amps) most = { node, fault, current, amps: size * base };
    }
    return most;
  };
}

/**
 * Walks from the bus outwards over the three-phase nodes that are not behind the breaker, and no further where less comes back
 * than for the node before: the bus keeps the more voltage the further away the fault is.
 */
function walkBehind(
  { upstream: { graph, branchOfEdge } }: OperatingCase,
  { branch, sourceSide }: Zone,
  { model }: SolvedCase,
  measure: (node: number) => Measured | undefined,
): Measured | undefined {
  const { kv } = nodeAt(model, sourceSide);
  const reached = new Set([sourceSide]);
  const atBus = measure(sourceSide);
  if (!atBus) return undefined;
  let most = atBus;
  const queue = [atBus];
  for (let head = 0; head < queue.length; head++) {
    const here = queue[head]!;
    for (let p = graph.start[here.node]!; p < graph.start[here.node + 1]!; p++) {
      const next = graph.neighbour[p]!;
      const { phases, kv: kvThere } = nodeAt(model, next);
      if (reached.has(next) || branchOfEdge[graph.edge[p]!] === branch) continue;
      reached.add(next);
      if (phases !== allPhases || kvThere !== kv) continue;
      const there = measure(next);
      if (!there || there.amps < here.amps * (1 - 1e-9)) continue;
      if (there.amps > most.amps * (1 + 1e-9)) most = there;
      queue.push(there);
    }
  }
  return most;
}
