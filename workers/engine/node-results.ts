import type {
  FaultCurrents,
  MinimumState,
  NodeResult,
  NodeState,
} from '../../shared/schemas/study-result.ts';
import type { Impedance } from '../../shared/schemas/study.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { magnitude } from './complex.ts';
import type { FaultArrays } from './fault-currents.ts';
import { findBusFaults, findSpotFaults } from './fault-currents.ts';
import type { FaultPoint } from './faults.ts';
import { largestPhase, lineGroundFault, listBoltedFaults } from './faults.ts';
import { nodeAt } from './model-parts.ts';
import { baseAmps, baseOhms } from './per-unit.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';
import type { StateName } from './states.ts';
import type { Arrays } from './work-arrays.ts';
import { withWorkArrays } from './work-arrays.ts';

/* What a study reports of a node, in ohms and amperes. */

/** Gives impedances and the largest current of each fault at a node. */
export function reportNode(solved: SolvedCase, node: number): NodeState {
  const { baseMva } = solved.model;
  const { kv, phases } = nodeAt(solved.model, node);
  const point = findFaultPoint(solved, node);
  const currents = largestCurrents(point, phases, baseAmps(baseMva, kv));
  if (phases !== allPhases) return currents;
  const ohms = baseOhms(baseMva, kv);
  const inOhms = (z: Complex | null | undefined): Impedance | null =>
    z ? { r: z.re * ohms, x: z.im * ohms } : null;
  return { z1: inOhms(point?.z1), z2: inOhms(point?.z2), z0: inOhms(point?.z0), ...currents };
}

function largestCurrents(point: FaultPoint | undefined, phases: number, amps: number): FaultCurrents {
  const ofPair = isOnePhase(phases) ? null : 0;
  const largest = {
    threePhase: phases === allPhases ? 0 : null,
    lineGround: 0,
    lineLine: ofPair,
    lineLineGround: ofPair,
    lineLineGroundEarth: ofPair,
  };
  for (const fault of point ? listBoltedFaults(point) : []) {
    const current = largestPhase(fault) * amps;
    if (current <= largest[fault.kind]!) continue;
    largest[fault.kind] = current;
    // The earth current that goes with the worst pair of phases, which need not be the largest of its own kind.
    if (fault.kind === 'lineLineGround') largest.lineLineGroundEarth = magnitude(fault.earth) * amps;
  }
  return largest;
}

function isOnePhase(phases: number): boolean {
  return phases === 1 || phases === 2 || phases === 4;
}

/**
 * Reports all nodes of the feeder, by id. `caseOf` gives the case that answers for a state at nodes of one voltage;
 * `faultOhm` is the resistance of the line-to-ground fault of state `minimum`.
 */
export function reportNodes(
  nodes: readonly { id: string; kv: number; ofProject?: boolean }[],
  caseOf: (state: StateName, kv: number) => SolvedCase,
  withProject: boolean,
  faultOhm: number,
): Record<string, NodeResult> {
  return withWorkArrays((arrays) => reportWith(arrays, nodes, caseOf, withProject, faultOhm));
}

function reportWith(
  arrays: Arrays,
  nodes: readonly { id: string; kv: number; ofProject?: boolean }[],
  caseOf: (state: StateName, kv: number) => SolvedCase,
  withProject: boolean,
  faultOhm: number,
): Record<string, NodeResult> {
  const readers = new Map<number, VoltageReaders>();
  const known = new Map<SolvedCase, CaseFaults>();
  const faultsOf = (solved: SolvedCase): CaseFaults => {
    let faults = known.get(solved);
    if (!faults) {
      faults = { atBus: findBusFaults(solved, arrays), atSpot: findSpotFaults(solved) };
      known.set(solved, faults);
    }
    return faults;
  };
  const read = (state: StateName, kv: number) => {
    const solved = caseOf(state, kv);
    return readState(solved, faultsOf(solved), kv);
  };
  const reports: Record<string, NodeResult> = {};
  for (let node = 0; node < nodes.length; node++) {
    const { id, kv, ofProject } = nodes[node]!;
    if (ofProject) continue;
    let at = readers.get(kv);
    if (!at) {
      at = {
        none: read('none', kv),
        before: read('before', kv),
        after: withProject ? read('after', kv) : undefined,
        minimum: readMinimum(caseOf('minimum', kv), faultsOf(caseOf('minimum', kv)), kv, faultOhm),
      };
      readers.set(kv, at);
    }
    const none = at.none(node);
    const before = at.before(node);
    const minimum = at.minimum(node);
    const report = at.after ? { none, before, after: at.after(node), minimum } : { none, before, minimum };
    if (id === '__proto__') Object.defineProperty(reports, id, { ...asField, value: report });
    else reports[id] = report;
  }
  return reports;
}

/** A field of this name would be taken for the object's prototype if it were set like any other. */
const asField = { writable: true, enumerable: true, configurable: true };

/** Of all buses and of all spots; cases that answer for several voltages are gone through once. */
type CaseFaults = { atBus: FaultArrays; atSpot: FaultArrays };

type VoltageReaders = {
  none: (node: number) => NodeState;
  before: (node: number) => NodeState;
  after: ((node: number) => NodeState) | undefined;
  minimum: (node: number) => MinimumState;
};

/** Makes a reader of `reportNode` for all nodes of one voltage, from a single pass over the case. */
function readState(
  solved: SolvedCase,
  { atBus, atSpot }: CaseFaults,
  kv: number,
): (node: number) => NodeState {
  const { busOf, laterals } = solved.topology;
  const { positive, negative, zero } = solved.networks;
  const amps = baseAmps(solved.model.baseMva, kv);
  const ohms = baseOhms(solved.model.baseMva, kv);
  const inOhms = ({ z, hasPath }: SequenceNetwork, bus: number): Impedance | null =>
    hasPath[bus] ? { r: z.re[bus]! * ohms, x: z.im[bus]! * ohms } : null;
  return (node) => {
    const bus = busOf[node]!;
    if (bus !== -1) {
      const z1 = inOhms(positive, bus);
      return {
        z1,
        z2: negative === positive ? z1 : inOhms(negative, bus),
        z0: positive.hasPath[bus] ? inOhms(zero, bus) : null,
        threePhase: atBus.threePhase[bus]! * amps,
        lineGround: atBus.lineGround[bus]! * amps,
        lineLine: atBus.lineLine[bus]! * amps,
        lineLineGround: atBus.lineLineGround[bus]! * amps,
        lineLineGroundEarth: atBus.lineLineGroundEarth[bus]! * amps,
      };
    }
    const spot = laterals.spotOf[node]!;
    if (spot === -1) return reportNode(solved, node);
    const hasPair = !isOnePhase(laterals.phases[spot]!);
    return {
      threePhase: null,
      lineGround: atSpot.lineGround[spot]! * amps,
      lineLine: hasPair ? atSpot.lineLine[spot]! * amps : null,
      lineLineGround: hasPair ? atSpot.lineLineGround[spot]! * amps : null,
      lineLineGroundEarth: hasPair ? atSpot.lineLineGroundEarth[spot]! * amps : null,
    };
  };
}

/** The smallest currents that protection must see: one line to ground through `faultOhm`, the others bolted. */
function readMinimum(
  solved: SolvedCase,
  { atBus, atSpot }: CaseFaults,
  kv: number,
  faultOhm: number,
): (node: number) => MinimumState {
  const { busOf, laterals } = solved.topology;
  const amps = baseAmps(solved.model.baseMva, kv);
  const through = { re: faultOhm / baseOhms(solved.model.baseMva, kv), im: 0 };
  const lineGroundThrough = (node: number): number => {
    const point = findFaultPoint(solved, node);
    if (!point) return 0;
    const phases = [0, 1, 2].filter((phase) => point.phases & (1 << phase));
    return Math.max(...phases.map((phase) => magnitude(lineGroundFault(point, phase, through).earth) * amps));
  };
  return (node) => {
    const bus = busOf[node]!;
    const spot = laterals.spotOf[node]!;
    const faults = bus === -1 ? atSpot : atBus;
    const place = bus === -1 ? spot : bus;
    if (place === -1) {
      const { threePhase, lineGround, lineLine } = reportNode(solved, node);
      return { threePhase, lineGround, lineLine };
    }
    const hasPair = bus !== -1 || !isOnePhase(laterals.phases[spot]!);
    return {
      threePhase: bus === -1 ? null : faults.threePhase[place]! * amps,
      lineGround: faultOhm === 0 ? faults.lineGround[place]! * amps : lineGroundThrough(node),
      lineLine: hasPair ? faults.lineLine[place]! * amps : null,
    };
  };
}
