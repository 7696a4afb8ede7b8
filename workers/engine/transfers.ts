import type { PhaseTriple } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { at, divide, multiply, subtract, zero } from './complex.ts';
import type { Fault } from './faults.ts';
import { phasesAt } from './laterals.ts';
import { branchAt } from './model-parts.ts';
import { negativeTurn, phasesOf, sequencesOf } from './open-circuit.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import { solveVoltages } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode } from './solve-case.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

/* What a current at one place does everywhere else: columns of the impedance matrices, one sweep each. */

/** Z_xf for every bus x and the bus f of one node; the negative sequence seen from the first bus of the island. */
export type Transfers = { node: number; z1: ComplexArray; z2: ComplexArray; z0: ComplexArray };

/** Gives a column of an impedance matrix; zero where current has no path. */
export function transferColumn(
  network: SequenceNetwork,
  bus: number,
  arrays: Arrays = newArrays,
): ComplexArray {
  const column = arrays.complex(network.hasPath.length);
  if (bus === -1 || !network.hasPath[bus]) return column;
  column.re[bus] = 1;
  solveVoltages(network, column);
  return column;
}

/** Gives the transfer impedances between a node, or its tap, and every bus. */
export function transfersFrom(solved: SolvedCase, node: number, arrays: Arrays = newArrays): Transfers {
  const { positive, negative, zero: zeroNetwork } = solved.networks;
  const bus = busOfNode(solved, node);
  const z1 = transferColumn(positive, bus, arrays);
  return {
    node,
    z1,
    z2: negative === positive ? z1 : transferColumn(negative, bus, arrays),
    z0: transferColumn(zeroNetwork, bus, arrays),
  };
}

/**
 * Gives the phase currents that a branch delivers to its end while any other place is faulted, what flows before included:
 * in each sequence (Vm − Vk)/z with V = Vo − Z_xf·If, and −Vk/z at a star-delta transformer's earthed side.
 * `fault` is one at the node of `transfers`.
 */
export function currentInBranch(
  solved: SolvedCase,
  transfers: Transfers,
  fault: Fault,
  branchIndex: number,
  end: 'from' | 'to',
): PhaseTriple {
  const { topology, openCircuit, model } = solved;
  const branch = branchAt(model, branchIndex);
  const k = topology.busOf[branch[end]]!;
  const m = topology.busOf[branch[end === 'from' ? 'to' : 'from']]!;
  if (k === -1 || m === -1) return currentInLateral(solved, transfers.node, fault, branchIndex, end);
  const { i1, i2, i0 } = sequencesOf(fault.currents);
  const hours = topology.clockHours;
  const turnOfFault = negativeTurn(hours[busOfNode(solved, transfers.node)]!);
  const i2There = multiply(i2, turnOfFault);
  const v1 = (bus: number) => subtract(at(openCircuit.v1, bus), multiply(at(transfers.z1, bus), i1));
  const v0 = (bus: number) => subtract(at(openCircuit.v0, bus), multiply(at(transfers.z0, bus), i0));
  /** Seen from bus k. */
  const v2 = (bus: number) => {
    const before = multiply(at(openCircuit.v2, bus), negativeTurn(hours[bus]! - hours[k]!));
    const fallen = multiply(multiply(at(transfers.z2, bus), i2There), negativeTurn(-hours[k]!));
    return subtract(before, fallen);
  };
  const between = (v: (bus: number) => Complex, z: Complex) => divide(subtract(v(m), v(k)), z);
  const path = branch.zeroSequence;
  const zeroSequence =
    path.kind === 'series'
      ? between(v0, path.z)
      : path.kind === 'shunt' && path.end === end
        ? divide(subtract(zero, v0(k)), path.z)
        : zero;
  return phasesOf(between(v1, branch.z1), between(v2, branch.z1), zeroSequence);
}

/** A lateral carries to a fault on it all that flows into the fault but for what comes from beyond. */
function currentInLateral(
  { topology, openCircuit, model }: SolvedCase,
  faultNode: number,
  { currents }: Fault,
  branchIndex: number,
  end: 'from' | 'to',
): PhaseTriple {
  const { spotOf, parent, branch } = topology.laterals;
  const fromSpot = spotOf[branchAt(model, branchIndex).from]!;
  const isOuter = fromSpot !== -1 && branch[fromSpot] === branchIndex;
  const outer = isOuter ? fromSpot : spotOf[branchAt(model, branchIndex).to]!;
  const outwards = (end === 'from') === isOuter;
  let spot = spotOf[faultNode]!;
  while (spot > outer) spot = parent[spot]!;
  const flow = outer === -1 ? [zero, zero, zero] : phasesAt(openCircuit.spotFlow, outer);
  const deliver = (phase: 0 | 1 | 2) => {
    const out = subtract(spot === outer && outer !== -1 ? currents[phase] : zero, flow[phase]!);
    return outwards ? out : subtract(zero, out);
  };
  return [deliver(0), deliver(1), deliver(2)];
}
