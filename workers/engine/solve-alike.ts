import type { Model, Shunt } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import { addUpPaths } from './laterals.ts';
import { modelAlike } from './model-parts.ts';
import { solveDrivingPoints } from './sequence-networks.ts';
import type { SolvedCase, TheveninCase } from './solve-case.ts';
import { topologyAlike } from './topology.ts';
import { wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';

/* A solved case with other impedances: what is joined to what is not looked for again. */

/** How each impedance changes, in its two parts: of what stands in the networks, and of the paths of laterals. */
export type ImpedanceChange = { network: PartsChange; path: PartsChange };

/** Numbers in and out, since there are many: an object for each impedance would cost more than all that follows. */
type PartsChange = { re: (re: number, im: number) => number; im: (re: number, im: number) => number };

/** Gives the model with every impedance changed, and all else as it was; those of its branches stand in its wiring. */
export function changeImpedances(model: Model, change: ImpedanceChange): Model {
  const { network } = change;
  const changed = ({ re, im }: Complex) => ({ re: network.re(re, im), im: network.im(re, im) });
  const orNull = (z: Complex | null) => z && changed(z);
  const shunt = (given: Shunt): Shunt => ({
    ...given,
    z1: orNull(given.z1),
    z2: orNull(given.z2),
    z0: orNull(given.z0),
  });
  const wiring = wiringOf(model);
  const { z1Re, z1Im, z0Re, z0Im, selfRe, selfIm, mutualRe, mutualIm, zeroGoesThrough } = wiring;
  const z1 = changeParts(z1Re, z1Im, network);
  const z0 = changeParts(z0Re, z0Im, network, zeroGoesThrough);
  const self = changeParts(selfRe, selfIm, change.path);
  const mutual = changeParts(mutualRe, mutualIm, change.path);
  return modelAlike(model, {
    wiring: {
      ...wiring,
      z1Re: z1.re,
      z1Im: z1.im,
      z0Re: z0.re,
      z0Im: z0.im,
      selfRe: self.re,
      selfIm: self.im,
      mutualRe: mutual.re,
      mutualIm: mutual.im,
      earths: wiring.earths.map((earth) => ({ ...earth, z: changed(earth.z) })),
    },
    sources: model.sources.map(({ max, min }) => ({ max: shunt(max), min: shunt(min) })),
    machines: model.machines.map(shunt),
    groundingBanks: model.groundingBanks.map(shunt),
  });
}

/** Changes all impedances, or those that `only` marks. */
function changeParts(
  re: Float64Array,
  im: Float64Array,
  change: PartsChange,
  only?: Uint8Array,
): ComplexArray {
  const changed = complexArray(re.length);
  for (let index = 0; index < re.length; index++) {
    if (only && !only[index]) continue;
    changed.re[index] = change.re(re[index]!, im[index]!);
    changed.im[index] = change.im(re[index]!, im[index]!);
  }
  return changed;
}

/**
 * Solves the networks of a case on `model`, which differs from the case's own in its impedances alone. Impedances are
 * right in what comes back; voltages before the fault are still those of the case.
 */
export function solveAlike(
  { topology: alike, choice, openCircuit }: SolvedCase,
  model: Model,
  arrays: Arrays,
): TheveninCase {
  const topology = topologyAlike(alike, model);
  const networks = solveDrivingPoints(model, choice, topology, arrays);
  return { topology, networks, paths: addUpPaths(model, topology), openCircuit };
}
