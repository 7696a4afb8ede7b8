import type { Rule } from '../../../shared/schemas/rule-sets.ts';
import { allPhases } from '../case.ts';
import { magnitude, sum } from '../complex.ts';
import type { Fault, FaultPoint } from '../faults.ts';
import { largestPhase, lineGroundFault, lineLineFault } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import { baseAmps, baseOhms } from '../per-unit.ts';
import type { BranchCurrent, BranchShares } from '../protection/branch-currents.ts';
import { branchCurrentFor, findBranchShares } from '../protection/branch-currents.ts';
import type { Scan } from '../protection/zone-scan.ts';
import { makeGroundScan, makePhaseScan } from '../protection/zone-scan.ts';
import type { Zone, ZoneKind } from '../protection/zones.ts';
import { findZoneEnds, listZones, traceFeeding } from '../protection/zones.ts';
import type { SolvedCase } from '../solve-case.ts';
import { findFaultPoint } from '../solve-case.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { ReachCase, ReachNetworks } from './reach-cases.ts';
import { solveReachCases } from './reach-cases.ts';
import { withoutResidue } from './residue.ts';
import type { Screening } from './screening.ts';

/* What each device carries for a fault at each end of its zone: what phase and ground reach have in common. */

/** One fault at the end of a zone, as the device sees it. */
export type Sight = {
  readonly amps: number;
  /** Ohms of a fault to ground. */
  readonly faultOhm: number;
  readonly point: FaultPoint;
  readonly fault: Fault;
  readonly current: BranchCurrent;
};

/** Which case it is, without what was solved for it: a screening outlives that. */
export type Deciding = Pick<ReachCase, 'operating' | 'words'>;

/** A fault with the project and without; nothing where the place is dead without it. */
export type Reach = {
  readonly zone: Zone;
  readonly node: number;
  readonly deciding: Deciding;
  readonly after: Sight;
  readonly before: Sight | undefined;
  /** Given where this end is the one that the device sees least of without the project. */
  readonly leastBefore: number | undefined;
};

/** What is wanted of a kind of fault; `keep` sees each measurement and remembers what it needs. */
export type ReachWanted = {
  readonly kind: ZoneKind;
  readonly rule: Rule;
  readonly faultOhms: readonly number[];
  readonly keep: (reach: Reach) => void;
};

/** Measures faults at every end of every zone in every case. */
export function measureReach(screening: Screening, wanted: readonly ReachWanted[]): void {
  for (const operating of screening.cases) {
    const asked = listAsked(screening, operating, wanted);
    if (asked.length === 0) continue;
    for (const networks of solveReachCases(screening, operating)) {
      for (const zone of asked) followZone(networks, zone);
    }
  }
}

/** One kind of fault at the ends of a zone. */
type EndFaults = Pick<ReachWanted, 'kind' | 'keep'> & { ohm: number; nodes: readonly number[] };

type AskedZone = { zone: Zone; faults: EndFaults[] };

function listAsked(
  screening: Screening,
  operating: OperatingCase,
  wanted: readonly ReachWanted[],
): AskedZone[] {
  const asked = new Map<Zone['device'], AskedZone>();
  for (const { kind, rule, faultOhms, keep } of wanted) {
    const { zones, endsOf } = zonesIn(screening, operating, rule);
    for (const zone of zones) {
      const nodes = pickupOf(zone.device, kind) === undefined ? [] : endsOf(zone, kind);
      if (nodes.length === 0) continue;
      if (!asked.has(zone.device)) asked.set(zone.device, { zone, faults: [] });
      asked.get(zone.device)!.faults.push(...faultOhms.map((ohm) => ({ kind, ohm, keep, nodes })));
    }
  }
  return [...asked.values()];
}

/** Looks at every end in numbers, and then closer at those that may decide. */
function followZone({ after, before, cases }: ReachNetworks, { zone, faults }: AskedZone): void {
  const sharesAfter = findBranchShares(after, zone.branch, zone.end);
  const sharesBefore = findBranchShares(before, zone.branch, zone.end);
  for (const reachCase of cases) {
    const deciding = { operating: reachCase.operating, words: reachCase.words };
    for (const { kind, ohm, nodes, keep } of faults) {
      const scanAfter = makeScan(reachCase.after, sharesAfter, zone, kind, ohm);
      const scanBefore = makeScan(reachCase.before, sharesBefore, zone, kind, ohm);
      const found = findDecisive(nodes, scanAfter, scanBefore);
      for (const node of found.nodes) {
        const seen = see(reachCase.after, sharesAfter, zone, node, kind, ohm);
        if (!seen) continue;
        const seenBefore = see(reachCase.before, sharesBefore, zone, node, kind, ohm);
        const leastBefore = found.before === node ? seenBefore?.amps : undefined;
        keep({ zone, node, deciding, after: seen, before: seenBefore, leastBefore });
      }
    }
  }
}

/** The ends with the least current, with the least without the project, and where the project lowers it most. */
function findDecisive(nodes: readonly number[], scanAfter: Scan, scanBefore: Scan) {
  const least = { after: Infinity, before: Infinity, kept: Infinity };
  const at = { after: -1, before: -1, kept: -1 };
  const take = (what: keyof typeof least, value: number, node: number) => {
    if (!(value < least[what] * (1 - rounding))) return;
    least[what] = value;
    at[what] = node;
  };
  for (const node of nodes) {
    const after = scanAfter(node);
    const before = scanBefore(node);
    take('after', after, node);
    take('before', before, node);
    take('kept', after / before, node);
  }
  return {
    before: at.before,
    nodes: [...new Set([at.after, at.before, at.kept])].filter((node) => node !== -1),
  };
}

/** What is less only by rounding is not less, so that the first of equals is named. */
const rounding = 1e-9;

function makeScan(solved: SolvedCase, shares: BranchShares, zone: Zone, kind: ZoneKind, ohm: number): Scan {
  // On a lateral the device carries what the fault draws; such zones are small.
  if (!shares.shares) return (node) => see(solved, shares, zone, node, kind, ohm)?.amps ?? NaN;
  if (kind === 'phase') return makePhaseScan(solved, shares);
  const { baseMva, nodes } = solved.model;
  return makeGroundScan(solved, shares, (node) => ohm / baseOhms(baseMva, nodes[node]!.kv));
}

type OperatingZones = { zones: readonly Zone[]; endsOf: (zone: Zone, kind: ZoneKind) => readonly number[] };

const known = new WeakMap<OperatingCase, Map<boolean, OperatingZones>>();

/** The zones of one way to run the feeder, and a finder of their ends; found once for all questions. */
export function zonesIn(
  screening: Screening,
  operating: OperatingCase,
  { parameters }: Rule,
): OperatingZones {
  const fusesBound = parameters?.fusesBoundZones === true;
  let ofCase = known.get(operating);
  if (!ofCase) known.set(operating, (ofCase = new Map()));
  let zones = ofCase.get(fusesBound);
  if (!zones) ofCase.set(fusesBound, (zones = traceZones(screening, operating, fusesBound)));
  return zones;
}

function traceZones(
  { study, model, poi }: Screening,
  { upstream, solver }: OperatingCase,
  fusesBound: boolean,
): OperatingZones {
  const feeding = traceFeeding(upstream);
  const { topology } = solver.solve('after', nodeAt(model, poi).kv);
  const inLoop = new Set(topology.mesh.branches);
  const zones = listZones(study, model, upstream, feeding, (branch) => inLoop.has(branch));
  const findEnds = findZoneEnds(study, model, upstream, feeding, fusesBound);
  const ends = { phase: new Map<Zone, readonly number[]>(), ground: new Map<Zone, readonly number[]>() };
  const endsOf = (zone: Zone, kind: ZoneKind) => {
    if (!ends[kind].has(zone)) ends[kind].set(zone, findEnds(zone, kind));
    return ends[kind].get(zone)!;
  };
  return { zones, endsOf };
}

export function pickupOf(device: Zone['device'], kind: ZoneKind): number | undefined {
  return kind === 'phase' ? device.phasePickupA : device.groundPickupA;
}

/** The least that the device sees over the choices of phases; nothing where no source feeds the place. */
function see(
  solved: SolvedCase,
  shares: BranchShares,
  zone: Zone,
  node: number,
  kind: ZoneKind,
  faultOhm: number,
): Sight | undefined {
  const point = findFaultPoint(solved, node);
  if (!point) return undefined;
  const { model } = solved;
  const amps = baseAmps(model.baseMva, nodeAt(model, zone.node).kv);
  const zf = { re: faultOhm / baseOhms(model.baseMva, nodeAt(model, node).kv), im: 0 };
  let least: Sight | undefined;
  for (const fault of kind === 'phase' ? listLineLine(point) : listLineGround(point, zf)) {
    const current = branchCurrentFor(solved, shares, node, fault);
    const all = kind === 'phase' ? largestPhase(current) : magnitude(sum(...current.currents));
    const size = withoutResidue(all, largestPhase(fault));
    if (!least || size * amps < least.amps) {
      least = { amps: size * amps, faultOhm, point, fault, current };
    }
  }
  return least;
}

function listLineGround(point: FaultPoint, zf: { re: number; im: number }): Fault[] {
  const phases = isAlike(point) ? [0] : [0, 1, 2].filter((p) => point.phases & (1 << p));
  return phases.map((p) => lineGroundFault(point, p, zf));
}

function listLineLine(point: FaultPoint): Fault[] {
  const pairs = (
    [
      [0, 1],
      [1, 2],
      [2, 0],
    ] as const
  ).filter(([p, q]) => point.phases & (1 << p) && point.phases & (1 << q));
  return (isAlike(point) ? pairs.slice(0, 1) : pairs).map(([p, q]) => lineLineFault(point, p, q));
}

/** One choice of phases stands for its like. */
function isAlike({ balanced, phases }: FaultPoint): boolean {
  return balanced && phases === allPhases;
}
