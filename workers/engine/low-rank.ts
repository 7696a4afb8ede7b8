import type { Shunt } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { add, at, complexArray, divide, magnitude, multiply, subtract, zero } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import { phasesOf } from './open-circuit.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode, findFaultPoint } from './solve-case.ts';
import { transferColumn } from './transfers.ts';

/*
 * A few shunts more, without solving again. With admittances y_k added at buses k,
 *   Z' = Z − C·M⁻¹·Cᵀ,  C the columns of Z at those buses,  M = diag(1/y_k) + the entries of Z among them
 * (Sherman, Morrison and Woodbury; W. W. Hager, "Updating the inverse of a matrix", SIAM Review 31 (1989)).
 * Each bus costs one sweep; then any place costs a handful of products.
 */

const unity: Complex = { re: 1, im: 0 };

/* Where so little is left of the terms of M that digits are lost, a new solve is the better answer. */
const tooClose = 1e-9;

type Update = { buses: readonly number[]; columns: readonly ComplexArray[]; inverse: readonly Complex[][] };

export type UpdatedCase = { readonly findPoint: (node: number) => FaultPoint | undefined };

/**
 * Gives a case with further shunts, behind which stands the same voltage E as behind all others. Nothing where that takes a
 * new solve: where a shunt stands outside the core, makes a path where none was, or nearly resonates with the network.
 */
export function addShunts(solved: SolvedCase, shunts: readonly Shunt[]): UpdatedCase | undefined {
  const { networks, topology, openCircuit, choice } = solved;
  const places = shunts.map((shunt) => ({ shunt, bus: topology.busOf[shunt.node]! }));
  if (places.some(({ bus }) => bus === -1)) return undefined;
  const update = (network: SequenceNetwork, sequence: 'z1' | 'z2' | 'z0') => {
    const added = new Map<number, Complex>();
    for (const { shunt, bus } of places) {
      const z = shunt[sequence];
      if (z) added.set(bus, add(added.get(bus) ?? zero, divide(unity, z)));
    }
    return makeUpdate(network, added);
  };
  const update1 = update(networks.positive, 'z1');
  const update2 = update(networks.negative, 'z2');
  const update0 = update(networks.zero, 'z0');
  if (!update1 || !update2 || !update0) return undefined;

  // E stands behind the new shunts too, so before the fault they only draw on what inverters add to it.
  const raised = complexArray(topology.busCount);
  for (const bus of update1.buses) {
    raised.re[bus] = openCircuit.v1.re[bus]! - choice.prefaultFactor;
    raised.im[bus] = openCircuit.v1.im[bus]!;
  }
  const findPoint = (node: number): FaultPoint | undefined => {
    const before = findFaultPoint(solved, node);
    if (!before) return undefined;
    const bus = busOfNode(solved, node);
    const fall1 = fallOf(update1, bus, raised);
    const fall2 = fallOf(update2, bus, openCircuit.v2);
    const fall0 = fallOf(update0, bus, openCircuit.v0);
    const falls = phasesOf(fall1, fall2, fall0);
    const [va, vb, vc] = before.voltage;
    return {
      ...before,
      z1: subtract(before.z1, changeAt(update1, bus)),
      z2: subtract(before.z2, changeAt(update2, bus)),
      z0: before.z0 && subtract(before.z0, changeAt(update0, bus)),
      voltage: [subtract(va, falls[0]), subtract(vb, falls[1]), subtract(vc, falls[2])],
    };
  };
  // The negative sequence of unbalanced inverters is kept seen from each bus, which a sum over buses must not mix.
  const mixesTurns = !openCircuit.balanced && topology.clockHours.some((hours) => hours !== 0);
  return mixesTurns ? undefined : { findPoint };
}

function makeUpdate(network: SequenceNetwork, added: ReadonlyMap<number, Complex>): Update | undefined {
  const buses = [...added.keys()];
  if (buses.some((bus) => !network.hasPath[bus])) return undefined;
  const columns = buses.map((bus) => transferColumn(network, bus));
  const matrix = buses.map((row, i) =>
    columns.map((column, j) =>
      i === j ? add(at(column, row), divide(unity, added.get(row)!)) : at(column, row),
    ),
  );
  for (const [i, bus] of buses.entries()) {
    const size = magnitude(at(columns[i]!, bus)) + 1 / magnitude(added.get(bus)!);
    if (magnitude(matrix[i]![i]!) <= tooClose * size) return undefined;
  }
  const inverse = invertSmall(matrix);
  return inverse && { buses, columns, inverse };
}

/** (C·M⁻¹·Cᵀ) at one bus. */
function changeAt({ columns, inverse }: Update, bus: number): Complex {
  let change = zero;
  columns.forEach((column, i) => {
    columns.forEach((other, j) => {
      change = add(change, multiply(multiply(at(column, bus), inverse[i]![j]!), at(other, bus)));
    });
  });
  return change;
}

/** By how much a voltage falls at one bus: C·M⁻¹ times the voltages at the changed buses. */
function fallOf({ buses, columns, inverse }: Update, bus: number, voltage: ComplexArray): Complex {
  let fall = zero;
  columns.forEach((column, i) => {
    buses.forEach((changed, j) => {
      fall = add(fall, multiply(multiply(at(column, bus), inverse[i]![j]!), at(voltage, changed)));
    });
  });
  return fall;
}

/** Inverts a matrix of a few rows (Gauss and Jordan, with pivoting); nothing where it is nearly singular. */
function invertSmall(matrix: readonly (readonly Complex[])[]): Complex[][] | undefined {
  const left = matrix.map((row) => [...row]);
  const right = matrix.map((_, i) => matrix.map((__, j) => (i === j ? unity : zero)));
  const scale = Math.max(0, ...matrix.flat().map(magnitude));
  for (let k = 0; k < left.length; k++) {
    let pivot = k;
    for (let i = k + 1; i < left.length; i++) {
      if (magnitude(left[i]![k]!) > magnitude(left[pivot]![k]!)) pivot = i;
    }
    if (magnitude(left[pivot]![k]!) <= tooClose * scale) return undefined;
    for (const side of [left, right]) [side[k], side[pivot]] = [side[pivot]!, side[k]!];
    const factor = divide(unity, left[k]![k]!);
    for (const side of [left, right]) side[k] = side[k]!.map((value) => multiply(value, factor));
    for (let i = 0; i < left.length; i++) {
      const times = left[i]![k]!;
      if (i === k) continue;
      for (const side of [left, right]) {
        side[i] = side[i]!.map((value, j) => subtract(value, multiply(times, side[k]![j]!)));
      }
    }
  }
  return right;
}
