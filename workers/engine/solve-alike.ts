import type { Branch, Model, Shunt, ZeroSequencePath } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { zero } from './complex.ts';
import { addUpPaths } from './laterals.ts';
import { solveSequenceNetworks } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { topologyAlike } from './topology.ts';

/* A solved case with other impedances: what is joined to what is not looked for again. */

/** How each impedance changes: of what stands in the networks, and of the paths of laterals. */
export type ImpedanceChange = { network: (z: Complex) => Complex; path: (z: Complex) => Complex };

/** Gives the model with every impedance changed, and all else as it was. */
export function changeImpedances(model: Model, { network, path }: ImpedanceChange): Model {
  const orNull = (z: Complex | null) => z && network(z);
  const shunt = <S extends Shunt>(given: S): S => ({
    ...given,
    z1: orNull(given.z1),
    z2: orNull(given.z2),
    z0: orNull(given.z0),
  });
  const zeroPath = (given: ZeroSequencePath): ZeroSequencePath => {
    if (given.kind === 'series') return { kind: 'series', z: network(given.z) };
    return given.kind === 'shunt' ? { kind: 'shunt', end: given.end, z: network(given.z) } : given;
  };
  const branches = model.branches.map((branch): Branch => {
    const { id, from, to, phases, clockHour, ofProject, companion } = branch;
    const isThreePhase = phases === allPhases;
    // Spelt out, since there are many: copying an object field by field is several times slower.
    return {
      id,
      from,
      to,
      phases,
      z1: network(branch.z1),
      zeroSequence: zeroPath(branch.zeroSequence),
      self: isThreePhase ? zero : path(branch.self),
      mutual: isThreePhase ? zero : path(branch.mutual),
      clockHour,
      ofProject,
      companion,
    };
  });
  return {
    ...model,
    branches,
    sources: model.sources.map(({ max, min }) => ({ max: shunt(max), min: shunt(min) })),
    machines: model.machines.map(shunt),
    groundingBanks: model.groundingBanks.map(shunt),
  };
}

/**
 * Solves the networks of a case on `model`, which differs from the case's own in its impedances alone. Impedances are
 * right in what comes back; voltages before the fault are still those of the case.
 */
export function solveAlike(solved: SolvedCase, model: Model): SolvedCase {
  const topology = topologyAlike(solved.topology, model);
  const networks = solveSequenceNetworks(model, solved.choice, topology);
  return { ...solved, model, topology, networks, paths: addUpPaths(model, topology) };
}
