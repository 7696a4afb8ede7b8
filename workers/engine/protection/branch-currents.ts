import type { PhaseTriple } from '../case.ts';
import type { Complex, ComplexArray } from '../complex.ts';
import { add, at, complexArray, divide, multiply, subtract, zero } from '../complex.ts';
import type { Fault } from '../faults.ts';
import { branchAt } from '../model-parts.ts';
import { negativeTurn, phasesOf, sequencesOf } from '../open-circuit.ts';
import type { SequenceNetwork } from '../sequence-networks.ts';
import { solveVoltages } from '../sequence-networks.ts';
import type { SolvedCase } from '../solve-case.ts';
import { busOfNode } from '../solve-case.ts';
import { currentInBranch } from '../transfers.ts';

/*
 * The current in one branch for faults anywhere: by symmetry of Z one sweep for each sequence serves all faulted places,
 * so that a device is followed to every end of its zone at the cost of one.
 */

/** In each sequence, by bus f: the share (Zkf − Zmf)/z of a fault's current at f that the branch delivers to its end k. */
export type BranchShares = {
  readonly branch: number;
  readonly end: 'from' | 'to';
  /** null on a lateral, which carries the whole current of a fault beyond. */
  readonly shares: { readonly d1: ComplexArray; readonly d2: ComplexArray; readonly d0: ComplexArray } | null;
};

/** What a branch delivers to its end for one fault, and how it comes about: current = share · fault current + prefault. */
export type BranchCurrent = {
  readonly currents: PhaseTriple;
  /** Of the sequences positive, negative and zero. */
  readonly shares: PhaseTriple;
  readonly prefault: PhaseTriple;
};

/** Finds the shares of a branch in one case; they hold with and without inverters alike. */
export function findBranchShares(solved: SolvedCase, branch: number, end: 'from' | 'to'): BranchShares {
  const { topology, networks, model } = solved;
  const { z1, zeroSequence, ...ends } = branchAt(model, branch);
  const k = topology.busOf[ends[end]]!;
  const m = topology.busOf[ends[end === 'from' ? 'to' : 'from']]!;
  if (k === -1 || m === -1) return { branch, end, shares: null };
  const d1 = sharesOf(networks.positive, k, m, z1);
  const d2 = networks.negative === networks.positive ? d1 : sharesOf(networks.negative, k, m, z1);
  if (zeroSequence.kind === 'series') {
    return { branch, end, shares: { d1, d2, d0: sharesOf(networks.zero, k, m, zeroSequence.z) } };
  }
  // The earthed side of a star-delta transformer delivers −Vk/z; the other side has no zero sequence.
  const isEarthed = zeroSequence.kind === 'shunt' && zeroSequence.end === end;
  const d0 = isEarthed ? sharesOf(networks.zero, k, -1, zeroSequence.z) : complexArray(topology.busCount);
  return { branch, end, shares: { d1, d2, d0 } };
}

function sharesOf(network: SequenceNetwork, k: number, m: number, z: Complex): ComplexArray {
  const shares = complexArray(network.hasPath.length);
  if (!network.hasPath[k]) return shares;
  shares.re[k]! += 1;
  if (m !== -1) shares.re[m]! -= 1;
  solveVoltages(network, shares);
  const square = z.re * z.re + z.im * z.im;
  for (let bus = 0; bus < shares.re.length; bus++) {
    const re = shares.re[bus]!;
    const im = shares.im[bus]!;
    shares.re[bus] = (re * z.re + im * z.im) / square;
    shares.im[bus] = (im * z.re - re * z.im) / square;
  }
  return shares;
}

/** Gives what the branch delivers to its end while `node` has this fault, per unit; `solved` may have other inverters in. */
export function branchCurrentFor(
  solved: SolvedCase,
  { branch, end, shares }: BranchShares,
  node: number,
  fault: Fault,
): BranchCurrent {
  if (!shares) return currentOnLateral(solved, branch, end, node, fault);
  const { clockHours, busOf } = solved.topology;
  const { from, to } = branchAt(solved.model, branch);
  const hoursAtEnd = clockHours[busOf[end === 'from' ? from : to]!]!;
  const bus = busOfNode(solved, node);
  const { i1, i2, i0 } = sequencesOf(fault.currents);
  const d1 = at(shares.d1, bus);
  const d2 = multiply(at(shares.d2, bus), negativeTurn(clockHours[bus]! - hoursAtEnd));
  const d0 = at(shares.d0, bus);
  const prefault = prefaultIn(solved, branch, end);
  const currents = phasesOf(
    add(prefault[0], multiply(d1, i1)),
    add(prefault[1], multiply(d2, i2)),
    add(prefault[2], multiply(d0, i0)),
  );
  return { currents, shares: [d1, d2, d0], prefault };
}

/** What the inverters send through the branch before the fault, by sequence: (Vom − Vok)/z. */
export function prefaultIn(
  { topology, openCircuit, model }: SolvedCase,
  index: number,
  end: 'from' | 'to',
): PhaseTriple {
  const { v1, v2, v0, balanced } = openCircuit;
  const branch = branchAt(model, index);
  const k = topology.busOf[branch[end]]!;
  const m = topology.busOf[branch[end === 'from' ? 'to' : 'from']]!;
  const i1 = divide(subtract(at(v1, m), at(v1, k)), branch.z1);
  if (balanced) return [i1, zero, zero];
  const turn = negativeTurn(topology.clockHours[m]! - topology.clockHours[k]!);
  const i2 = divide(subtract(multiply(at(v2, m), turn), at(v2, k)), branch.z1);
  const path = branch.zeroSequence;
  if (path.kind === 'series') return [i1, i2, divide(subtract(at(v0, m), at(v0, k)), path.z)];
  const isEarthed = path.kind === 'shunt' && path.end === end;
  return [i1, i2, isEarthed ? divide(subtract(zero, at(v0, k)), path.z) : zero];
}

const one: Complex = { re: 1, im: 0 };
const wholeOfIt: PhaseTriple = [one, one, one];
const none: PhaseTriple = [zero, zero, zero];
const nothing = complexArray(0);

function currentOnLateral(
  solved: SolvedCase,
  branch: number,
  end: 'from' | 'to',
  node: number,
  fault: Fault,
): BranchCurrent {
  const transfers = { node, z1: nothing, z2: nothing, z0: nothing };
  const currents = currentInBranch(solved, transfers, fault, branch, end);
  const flow = sequencesOf(currents);
  const whole = sequencesOf(fault.currents);
  // Delivered to an end that looks at the tap, a current towards the fault counts negative.
  const sign = alongFault(currents, fault) ? 1 : -1;
  const rest = (delivered: Complex, total: Complex) =>
    subtract(delivered, multiply({ re: sign, im: 0 }, total));
  const prefault: PhaseTriple = [rest(flow.i1, whole.i1), rest(flow.i2, whole.i2), rest(flow.i0, whole.i0)];
  return {
    currents,
    shares: sign === 1 ? wholeOfIt : [minusOne, minusOne, minusOne],
    prefault: tidy(prefault),
  };
}

const minusOne: Complex = { re: -1, im: 0 };

function alongFault(currents: PhaseTriple, fault: Fault): boolean {
  return (
    currents.reduce(
      (total, { re, im }, p) => total + re * fault.currents[p]!.re + im * fault.currents[p]!.im,
      0,
    ) >= 0
  );
}

function tidy(triple: PhaseTriple): PhaseTriple {
  return triple.every(({ re, im }) => Math.abs(re) + Math.abs(im) < 1e-12) ? none : triple;
}
