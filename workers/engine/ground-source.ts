import type { Complex } from './complex.ts';
import { add, at, divide, magnitude, multiply } from './complex.ts';
import { baseAmps, baseOhms } from './per-unit.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode, findFaultPoint } from './solve-case.ts';
import { transferColumn } from './transfers.ts';

/* Sizes and ratings of what makes a plant a ground source: a neutral reactor for machines, a grounding bank for inverters. */

/**
 * Gives the reactance between neutral and earth, in ohms, that brings a place to a target of X0/X1:
 * X0 = XT0 + 3·Xn = k·X1, so Xn = (k·X1 − XT0)/3; 0 where the transformer alone is at the target or over it, which no
 * neutral reactor can mend. All in ohms at one voltage (IEEE 142; formula from memory).
 * Example: k 2.5, X1 4 Ω, XT0 4 Ω: 2 Ω.
 */
export function sizeNeutralReactor({
  targetX0OverX1,
  x1Ohms,
  transformerX0Ohms,
}: {
  targetX0OverX1: number;
  x1Ohms: number;
  transformerX0Ohms: number;
}): number {
  return Math.max(0, (targetX0OverX1 * x1Ohms - transformerX0Ohms) / 3);
}

/** A grounding bank for a plant of inverters; per phase, as its zero sequence is given. */
export type GroundBankSize = {
  baseOhms: number;
  x0Ohms: number;
  /** The bounds between which X0 may be chosen. */
  leastX0Ohms: number;
  mostX0Ohms: number;
  /** The most resistance that keeps X0/R0 at `x0Ohms`. */
  mostR0Ohms: number;
};

/**
 * Sizes a grounding bank by the customary 0.6 per unit, give or take 10 %, on the plant's base, with X0/R0 of at least 4
 * (a draft guide to IEEE 1547, P1547.8; values from memory).
 * Example: 5 MVA at 12.47 kV: Zbase 31.100 Ω, X0 18.660 Ω, R0 at most 4.665 Ω.
 */
export function sizeGroundBank({
  kv,
  plantKva,
  x0Pu = 0.6,
  tolerance = 0.1,
  leastX0OverR0 = 4,
}: {
  kv: number;
  plantKva: number;
  x0Pu?: number;
  tolerance?: number;
  leastX0OverR0?: number;
}): GroundBankSize {
  const ohms = baseOhms(plantKva / 1000, kv);
  const x0Ohms = x0Pu * ohms;
  return {
    baseOhms: ohms,
    x0Ohms,
    leastX0Ohms: x0Ohms * (1 - tolerance),
    mostX0Ohms: x0Ohms * (1 + tolerance),
    mostR0Ohms: x0Ohms / leastX0OverR0,
  };
}

/** What the neutral of a ground source has to carry for ten seconds: 3·I0 of the worst fault. */
export type NeutralDuty = {
  amps: number;
  /** The node at which one phase touches earth then. */
  node: string;
};

/**
 * Finds the largest neutral current of a ground source at `node` over bolted line-to-ground faults at every three-phase
 * node of a case, which has the utility and the ground source in: 3·|Z0_nf·I0/z0|, with I0 = E/(Z0 + Z1 + Z2) at the
 * fault f and Z0_nf between both. `z0` is that of the ground source alone, per unit of the model's base, 3·Zn included.
 * What inverters add before the fault is left out. Nothing where no ground current reaches it.
 */
export function findNeutralDuty(solved: SolvedCase, node: number, z0: Complex): NeutralDuty | undefined {
  const { model, networks, topology, choice } = solved;
  const bus = busOfNode(solved, node);
  if (bus === -1 || !networks.zero.hasPath[bus]) return undefined;
  const column = transferColumn(networks.zero, bus);
  const amps = baseAmps(model.baseMva, model.nodes[node]!.kv);
  let worst: NeutralDuty | undefined;
  for (let index = 0; index < model.nodes.length; index++) {
    const faulted = topology.busOf[index]!;
    if (faulted === -1) continue;
    const point = findFaultPoint(solved, index);
    if (!point?.z0) continue;
    const i0 = divide({ re: choice.prefaultFactor, im: 0 }, add(add(point.z0, point.z1), point.z2));
    const through = magnitude(divide(multiply(at(column, faulted), i0), z0));
    if (through * 3 * amps > (worst?.amps ?? 0) * (1 + 1e-9)) {
      worst = { amps: through * 3 * amps, node: model.nodes[index]!.id };
    }
  }
  return worst;
}

/**
 * Gives the current that the neutral of a ground source carries all the time, from a standing zero-sequence voltage of
 * `standingPercent` of nominal line to neutral (1 to 3 %, common practice, value from memory): 3·V0/|z0|, z0 in ohms with
 * 3·Zn in it. Example: 3 % at 12.47 kV over j18.660 Ω: 34.72 A.
 */
export function findContinuousNeutralAmps({
  kv,
  z0Ohms,
  standingPercent,
}: {
  kv: number;
  z0Ohms: Complex;
  standingPercent: number;
}): number {
  const v0 = ((standingPercent / 100) * kv * 1000) / Math.sqrt(3);
  return (3 * v0) / magnitude(z0Ohms);
}
