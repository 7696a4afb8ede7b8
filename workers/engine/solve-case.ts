import type { CaseChoice, Model } from './case.ts';
import { allPhases } from './case.ts';
import { at, zero } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import type { LateralPaths } from './laterals.ts';
import { addUpPaths, phasesAt } from './laterals.ts';
import type { OpenCircuit } from './open-circuit.ts';
import { phasesOf, solveOpenCircuit } from './open-circuit.ts';
import type { DrivingPoints, SequenceNetworks } from './sequence-networks.ts';
import { drivingPoint, solveSequenceNetworks } from './sequence-networks.ts';
import type { Topology } from './topology.ts';
import { shareTopology } from './topology.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays, withWorkArrays } from './work-arrays.ts';

/** A case with everything that a fault anywhere in it needs. */
export type SolvedCase = {
  readonly model: Model;
  readonly choice: CaseChoice;
  readonly topology: Topology;
  readonly networks: SequenceNetworks;
  readonly paths: LateralPaths;
  readonly openCircuit: OpenCircuit;
};

/** Of a case, what the Thevenin equivalent at a place needs. */
export type TheveninCase = Pick<SolvedCase, 'topology' | 'paths' | 'openCircuit'> & {
  readonly networks: DrivingPoints;
};

/** Solves one choice of what is in and out; the case lives as long as `arrays` do. */
export function solveCase(model: Model, choice: CaseChoice, arrays: Arrays = newArrays): SolvedCase {
  const topology = shareTopology(model, choice);
  const networks = solveSequenceNetworks(model, choice, topology, arrays);
  const openCircuit = solveOpenCircuit(model, choice, topology, networks, arrays);
  return { model, choice, topology, networks, paths: addUpPaths(model, topology), openCircuit };
}

/** Solves a case that is needed only as long as `use` runs; nothing that it gives may hold any of the case's arrays. */
export function withCase<R>(
  model: Model,
  choice: CaseChoice,
  use: (solved: SolvedCase, arrays: Arrays) => R,
): R {
  return withWorkArrays((arrays) => use(solveCase(model, choice, arrays), arrays));
}

/** Gives the case without its inverters, which are in none of its networks. */
export function withoutInverters(solved: SolvedCase): SolvedCase {
  const { model, topology, networks } = solved;
  if (model.inverters.length === 0) return solved;
  const choice: CaseChoice = { ...solved.choice, inverters: 'none' };
  return { ...solved, choice, openCircuit: solveOpenCircuit(model, choice, topology, networks) };
}

/** The bus of a node, or the one that its lateral hangs from; -1 where the node is absent or cut off. */
export function busOfNode({ topology }: Pick<SolvedCase, 'topology'>, node: number): number {
  const spot = topology.laterals.spotOf[node]!;
  return spot === -1 ? topology.busOf[node]! : topology.laterals.tap[spot]!;
}

/** Gives the Thevenin equivalent at a node, nothing where no source or machine feeds it. */
export function findFaultPoint(solved: TheveninCase, node: number): FaultPoint | undefined {
  const { topology, networks, paths, openCircuit } = solved;
  const bus = busOfNode(solved, node);
  if (bus === -1 || !networks.positive.hasPath[bus]) return undefined;
  const spot = topology.laterals.spotOf[node]!;
  return {
    phases: spot === -1 ? allPhases : topology.laterals.phases[spot]!,
    z1: drivingPoint(networks.positive, bus),
    z2: drivingPoint(networks.negative, bus),
    z0: networks.zero.hasPath[bus] ? drivingPoint(networks.zero, bus) : null,
    self: spot === -1 ? zero : at(paths.self, spot),
    mutual: spot === -1 ? zero : at(paths.mutual, spot),
    voltage:
      spot === -1
        ? phasesOf(at(openCircuit.v1, bus), at(openCircuit.v2, bus), at(openCircuit.v0, bus))
        : phasesAt(openCircuit.spotVoltage, spot),
    balanced: openCircuit.balanced,
  };
}
