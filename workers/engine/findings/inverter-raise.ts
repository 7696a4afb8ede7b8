import type { CurrentSource } from '../case.ts';
import { isMember, isPresent } from '../case.ts';
import type { Complex, ComplexArray } from '../complex.ts';
import { at, complexArray, magnitude, multiply } from '../complex.ts';
import { sequencesOf } from '../open-circuit.ts';
import { solveVoltages } from '../sequence-networks.ts';
import type { SolvedCase } from '../solve-case.ts';
import { busOfNode } from '../solve-case.ts';
import { transferColumn } from '../transfers.ts';
import type { Arrays } from '../work-arrays.ts';
import { withWorkArrays } from '../work-arrays.ts';

/*
 * Inverter currents added in magnitude, each scaled by |Zkm/Zkk|, as IEC 60909-0:2016 adds those of full-converter
 * units (value from memory). A fixed angle understates them where the circuit is resistive; magnitudes cannot.
 */

/**
 * Gives by how much of E the inverters raise the voltage at a node when nothing cancels: Σ|Zkm|·|Im| over sequences and
 * inverters, over E. Every fault current there is at most 1 + this times what it is without inverters.
 */
export function findInverterRaise(solved: SolvedCase, node: number): number {
  const taking = listTakingPart(solved);
  const bus = busOfNode(solved, node);
  if (bus === -1 || !solved.networks.positive.hasPath[bus] || taking.length === 0) return 0;
  return withWorkArrays((arrays) => addUpRaise(solved, node, taking, transferColumns(solved, bus, arrays)));
}

function addUpRaise(
  solved: SolvedCase,
  node: number,
  taking: readonly CurrentSource[],
  columns: readonly ComplexArray[],
): number {
  const { choice, topology, paths } = solved;
  const bus = busOfNode(solved, node);
  const spot = topology.laterals.spotOf[node]!;
  let raise = 0;
  for (const inverter of taking) {
    const from = busOfNode(solved, inverter.node);
    const { i1, i2, i0 } = sequencesOf(inverter.currents);
    [i1, i2, i0].forEach((current, sequence) => {
      const column = columns[sequence];
      if (column) raise += magnitude(multiply(at(column, from), current));
    });
    // Beyond a tap two paths share at most the whole of this one.
    const sharesLateral = spot !== -1 && from === bus && topology.laterals.spotOf[inverter.node] !== -1;
    if (sharesLateral) raise += magnitude(at(paths.self, spot)) * largestOf(inverter.currents);
  }
  return raise / choice.prefaultFactor;
}

/**
 * Gives a bound of `findInverterRaise` for any node, by one solve for all of them: with all currents in line the sum
 * is |Σ Zkm·|Im||, and since resistance and reactance are not negative Σ|Zkm|·|Im| is at most √2 times that.
 */
export function boundInverterRaise(solved: SolvedCase): (node: number) => number {
  const { choice, networks, topology, paths } = solved;
  const taking = listTakingPart(solved);
  if (taking.length === 0) return () => 0;
  const sums = [networks.positive, networks.negative, networks.zero].map((network, sequence) => {
    const values = complexArray(topology.busCount);
    for (const inverter of taking) {
      const { i1, i2, i0 } = sequencesOf(inverter.currents);
      const size = magnitude([i1, i2, i0][sequence]!);
      const bus = busOfNode(solved, inverter.node);
      if (network.hasPath[bus]) values.re[bus]! += size;
    }
    solveVoltages(network, values);
    return values;
  });
  const all = taking.reduce((total, { currents }) => total + largestOf(currents), 0);
  return (node) => {
    const bus = busOfNode(solved, node);
    if (bus === -1) return 0;
    const spot = topology.laterals.spotOf[node]!;
    const core = sums.reduce((total, values) => total + magnitude(at(values, bus)), 0) * Math.SQRT2;
    const path = spot === -1 ? 0 : magnitude(at(paths.self, spot)) * all;
    return (core + path) / choice.prefaultFactor;
  };
}

function listTakingPart({ model, choice, topology }: SolvedCase): CurrentSource[] {
  return model.inverters.filter(
    (inverter) =>
      isMember(choice.inverters, inverter.ofProject) &&
      isPresent(choice, inverter) &&
      (topology.busOf[inverter.node] !== -1 || topology.laterals.spotOf[inverter.node] !== -1),
  );
}

/** Columns of Z1, Z2 and Z0 at a bus; the last two only where unbalanced inverters need them. */
function transferColumns({ networks, openCircuit }: SolvedCase, bus: number, arrays: Arrays) {
  const wanted = openCircuit.balanced
    ? [networks.positive]
    : [networks.positive, networks.negative, networks.zero];
  return wanted.map((network) => transferColumn(network, bus, arrays));
}

function largestOf(currents: readonly Complex[]): number {
  return Math.max(...currents.map(magnitude));
}
