import type { CoordinationElement, ZoneFault } from '../../../shared/schemas/coordination.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import type { PhaseTriple } from '../case.ts';
import { allPhases } from '../case.ts';
import { magnitude, subtract, sum } from '../complex.ts';
import type { Fault } from '../faults.ts';
import { largestPhase, listBoltedFaults } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import type { Screening } from '../findings/screening.ts';
import { baseAmps } from '../per-unit.ts';
import type { SolvedCase } from '../solve-case.ts';
import { findFaultPoint, solveCase } from '../solve-case.ts';
import type { BranchShares } from './branch-currents.ts';
import { branchCurrentFor, findBranchShares } from './branch-currents.ts';
import { makeGroundScan, makePhaseScan } from './zone-scan.ts';
import type { Zone } from './zones.ts';
import { findZoneEnds, listZones, traceFeeding } from './zones.ts';

/* The devices on the project's way to the source, and the faults by which they are timed. */

type FaultKind = ZoneFault['fault'];

/** A bolted fault at one end of a zone: near ends with the strongest source, far ends with the weakest. */
export type PlacedFault = {
  readonly element: CoordinationElement;
  readonly end: 'near' | 'far';
  readonly node: number;
  readonly kind: FaultKind;
  /** Phases of the fault, so that before and after are the same one. */
  readonly index: number;
};

export type WatchedDevice = {
  readonly zone: Zone;
  /** The largest phase current, or 3I0, that it carries towards a fault beyond it. */
  readonly ampsFor: (fault: PlacedFault, state: 'before' | 'after', quantity: CoordinationElement) => number;
  /** The ends of its zone, or of many the one that it sees least of. */
  readonly farEnds: (element: CoordinationElement) => readonly number[];
};

type States = Record<'near' | 'far', Record<'before' | 'after', SolvedCase>>;

const statesOf = new WeakMap<Screening, States>();

function solveStates(screening: Screening): States {
  let states = statesOf.get(screening);
  if (!states) {
    const { model, states: solved } = screening;
    const weakest = (project: boolean) =>
      solveCase(model, { ...solved.minimum.choice, machines: 'all', inverters: 'all', project });
    states = {
      near: { before: solved.before, after: solved.after },
      far: { before: weakest(false), after: weakest(true) },
    };
    statesOf.set(screening, states);
  }
  return states;
}

/** Lists the devices that interrupt or trip between the source and the point of interconnection, from the source. */
export function watchPath(screening: Screening): WatchedDevice[] {
  const { study, model, upstream } = screening;
  const feeding = traceFeeding(upstream);
  const onPath = new Set(upstream.branches);
  const asked = (study.feeder.devices ?? []).map(asAutomatic);
  const withFuses = { ...study, feeder: { ...study.feeder, devices: asked } };
  const findEnds = findZoneEnds(withFuses, model, upstream, feeding, true);
  return listZones(withFuses, model, upstream, feeding, () => false)
    .filter(({ branch }) => onPath.has(branch))
    .map((zone) => watch(screening, zone, (element) => findEnds(zone, element)));
}

/** Here a fuse, or whatever has a curve, counts as a device that clears faults by itself. */
function asAutomatic(device: Device): Device {
  const clears =
    device.kind === 'fuse' || device.phaseCurve !== undefined || device.groundCurve !== undefined;
  return clears ? { ...device, sectionalizing: true } : device;
}

function watch(
  screening: Screening,
  zone: Zone,
  endsFor: (element: CoordinationElement) => readonly number[],
): WatchedDevice {
  const states = solveStates(screening);
  const shares = new Map<SolvedCase, BranchShares>();
  const sharesIn = (solved: SolvedCase) => {
    if (!shares.has(solved)) shares.set(solved, findBranchShares(solved, zone.branch, zone.end));
    return shares.get(solved)!;
  };
  const base = baseAmps(screening.model.baseMva, nodeAt(screening.model, zone.node).kv);
  const ampsFor: WatchedDevice['ampsFor'] = (placed, state, quantity) => {
    const solved = states[placed.end][state];
    const fault = findFault(solved, placed);
    if (!fault) return 0;
    const currents = forwardCurrents(solved, sharesIn(solved), zone, placed.node, fault);
    return base * (quantity === 'phase' ? largestPhase({ currents }) : magnitude(sum(...currents)));
  };
  const farEnds: WatchedDevice['farEnds'] = (element) => {
    const ends = endsFor(element);
    const solved = states.far.after;
    const known = sharesIn(solved);
    // On a lateral there are few, and what a device sees of them is what they draw.
    if (!known.shares) return ends;
    const scan = element === 'phase' ? makePhaseScan(solved, known) : makeGroundScan(solved, known, () => 0);
    let least = { amps: Infinity, node: -1 };
    for (const node of ends) {
      const amps = scan(node);
      if (amps < least.amps * (1 - 1e-9)) least = { amps, node };
    }
    return least.node === -1 ? [] : [least.node];
  };
  return { zone, ampsFor, farEnds };
}

function findFault(solved: SolvedCase, { node, kind, index }: PlacedFault): Fault | undefined {
  const point = findFaultPoint(solved, node);
  return point && listAll(point).filter((fault) => fault.kind === kind)[index];
}

/** Every choice of phases, also where one stands for its like: a case with inverters has more than one without. */
function listAll(point: NonNullable<ReturnType<typeof findFaultPoint>>): Fault[] {
  return listBoltedFaults({ ...point, balanced: false });
}

/** For a fault where the device stands, just beyond it: all that its own branch does not bring from the far side. */
function forwardCurrents(
  solved: SolvedCase,
  shares: BranchShares,
  zone: Zone,
  node: number,
  fault: Fault,
): PhaseTriple {
  const { currents } = branchCurrentFor(solved, shares, node, fault);
  if (node !== zone.node || zone.node === zone.near) return currents;
  const [a, b, c] = fault.currents;
  return [subtract(a, currents[0]), subtract(b, currents[1]), subtract(c, currents[2])];
}

/**
 * Lists the faults that a device is timed by: the one that it carries most of where it stands, and, where it carries least of
 * it, a line-to-line or line-to-ground fault at the far end of its zone, all as they are with the project.
 */
export function listZoneFaults({ model }: Screening, watched: WatchedDevice): PlacedFault[] {
  const { device } = watched.zone;
  const isFuse = device.phaseCurve?.kind === 'fuse';
  const hasGround = device.groundPickupA !== undefined || device.groundCurve !== undefined || isFuse;
  const elements: CoordinationElement[] = hasGround ? ['phase', 'ground'] : ['phase'];
  return elements.flatMap((element) => {
    const near = pick(
      watched,
      candidatesAt(model, watched.zone.node, element, 'near', nearKinds[element]),
      'most',
    );
    const far = watched
      .farEnds(element)
      .flatMap((node) => candidatesAt(model, node, element, 'far', farKinds[element]));
    return [near, pick(watched, far, 'least')].filter((fault) => fault !== undefined);
  });
}

const nearKinds: Record<CoordinationElement, readonly FaultKind[]> = {
  phase: ['threePhase', 'lineLine', 'lineLineGround', 'lineGround'],
  ground: ['lineGround', 'lineLineGround'],
};

const farKinds: Record<CoordinationElement, readonly FaultKind[]> = {
  phase: ['lineLine'],
  ground: ['lineGround'],
};

function candidatesAt(
  { nodes }: Screening['model'],
  node: number,
  element: CoordinationElement,
  end: PlacedFault['end'],
  kinds: readonly FaultKind[],
): PlacedFault[] {
  const { phases } = nodes[node]!;
  const count = [1, 2, 4].filter((phase) => phases & phase).length;
  const choices = { threePhase: phases === allPhases ? 1 : 0, lineGround: count };
  const pairs = count === 3 ? 3 : count - 1;
  return kinds.flatMap((kind) => {
    const length = kind === 'threePhase' || kind === 'lineGround' ? choices[kind] : pairs;
    return Array.from({ length }, (_, index) => ({ element, end, node, kind, index }));
  });
}

function pick(
  watched: WatchedDevice,
  faults: readonly PlacedFault[],
  wanted: 'most' | 'least',
): PlacedFault | undefined {
  const sign = wanted === 'most' ? 1 : -1;
  let best: { fault: PlacedFault; amps: number } | undefined;
  for (const fault of faults) {
    const amps = watched.ampsFor(fault, 'after', fault.element);
    if (!best || sign * (amps - best.amps) > 1e-9 * best.amps) best = { fault, amps };
  }
  return best?.fault;
}
