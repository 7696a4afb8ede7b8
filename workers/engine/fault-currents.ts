import { allPhases } from './case.ts';
import type { ComplexArray } from './complex.ts';
import { largestFaults, faultPlace } from './fault-kernel.ts';
import type { SequenceNetworks } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

/*
 * The bolted faults of all buses and spots of a case in one pass over typed arrays: the largest phase current of each kind,
 * per unit, and the earth current of two lines to ground. faults.ts does the same for one place, with phasors.
 */

export type FaultArrays = {
  readonly threePhase: Float64Array;
  readonly lineGround: Float64Array;
  readonly lineLine: Float64Array;
  readonly lineLineGround: Float64Array;
  readonly lineLineGroundEarth: Float64Array;
};

export function faultArrays(count: number, arrays: Arrays = newArrays): FaultArrays {
  return {
    threePhase: arrays.floats(count),
    lineGround: arrays.floats(count),
    lineLine: arrays.floats(count),
    lineLineGround: arrays.floats(count),
    lineLineGroundEarth: arrays.floats(count),
  };
}

/** Gives the fault currents at every bus; those that nothing feeds have none. */
export function findBusFaults(
  { networks, openCircuit, topology }: SolvedCase,
  arrays: Arrays = newArrays,
): FaultArrays {
  const faults = faultArrays(topology.busCount, arrays);
  if (openCircuit.balanced) passBalanced(networks, openCircuit.v1, faults);
  else passUnbalanced(networks, openCircuit, faults);
  return faults;
}

/**
 * With V1 alone before the fault:
 *   three-phase |V1/Z1|, line to ground 3·|V1/(Z0 + Z1 + Z2)|, line to line √3·|V1/(Z1 + Z2)|,
 *   two lines to ground, with D = Z1·Z2 + Z0·(Z1 + Z2): phases √3·|V1·(Z0 − a·Z2)/D| and √3·|V1·(Z0 − a²·Z2)/D|,
 *   of which the larger is √3·|V1|·√(|Z0|² + |Z2|² + p + √3·|q|)/|D| with p + jq = Z0·Z2*, and earth 3·|V1·Z2/D|.
 */
function passBalanced(
  { positive, negative, zero }: SequenceNetworks,
  v1: ComplexArray,
  faults: FaultArrays,
): void {
  const { re: z1Re, im: z1Im } = positive.z;
  const { re: z2Re, im: z2Im } = negative.z;
  const { re: z0Re, im: z0Im } = zero.z;
  const { threePhase, lineGround, lineLine, lineLineGround, lineLineGroundEarth } = faults;
  const hasPath = positive.hasPath;
  const hasZero = zero.hasPath;
  for (let bus = 0; bus < threePhase.length; bus++) {
    if (hasPath[bus] === 0) continue;
    const vRe = v1.re[bus]!;
    const vIm = v1.im[bus]!;
    const v = vRe * vRe + vIm * vIm;
    const r1 = z1Re[bus]!;
    const x1 = z1Im[bus]!;
    const r2 = z2Re[bus]!;
    const x2 = z2Im[bus]!;
    const r12 = r1 + r2;
    const x12 = x1 + x2;
    threePhase[bus] = Math.sqrt(v / (r1 * r1 + x1 * x1));
    const pair = Math.sqrt((3 * v) / (r12 * r12 + x12 * x12));
    lineLine[bus] = pair;
    if (hasZero[bus] === 0) {
      lineLineGround[bus] = pair;
      continue;
    }
    const r0 = z0Re[bus]!;
    const x0 = z0Im[bus]!;
    const rAll = r12 + r0;
    const xAll = x12 + x0;
    lineGround[bus] = 3 * Math.sqrt(v / (rAll * rAll + xAll * xAll));
    const dRe = r1 * r2 - x1 * x2 + r0 * r12 - x0 * x12;
    const dIm = r1 * x2 + x1 * r2 + r0 * x12 + x0 * r12;
    const factor = Math.sqrt((3 * v) / (dRe * dRe + dIm * dIm));
    const square2 = r2 * r2 + x2 * x2;
    const p = r0 * r2 + x0 * x2;
    const q = Math.abs(x0 * r2 - r0 * x2);
    lineLineGround[bus] = factor * Math.sqrt(r0 * r0 + x0 * x0 + square2 + p + Math.sqrt(3) * q);
    lineLineGroundEarth[bus] = factor * Math.sqrt(3 * square2);
  }
}

function passUnbalanced(
  { positive, negative, zero }: SequenceNetworks,
  { v1, v2, v0 }: SolvedCase['openCircuit'],
  faults: FaultArrays,
): void {
  const place = faultPlace();
  for (let bus = 0; bus < faults.threePhase.length; bus++) {
    if (positive.hasPath[bus] === 0) continue;
    place.takeImpedances(positive.z, negative.z, zero.hasPath[bus] ? zero.z : null, bus);
    place.takeSequenceVoltages(v1, v2, v0, bus);
    largestFaults(place, allPhases, faults, bus);
  }
}

/** Gives the fault currents at every spot. */
export function findSpotFaults({ networks, openCircuit, topology, paths }: SolvedCase): FaultArrays {
  const { positive, negative, zero } = networks;
  const { tap, phases } = topology.laterals;
  const faults = faultArrays(tap.length);
  const place = faultPlace();
  for (let spot = 0; spot < tap.length; spot++) {
    const bus = tap[spot]!;
    if (positive.hasPath[bus] === 0) continue;
    place.takeImpedances(positive.z, negative.z, zero.hasPath[bus] ? zero.z : null, bus);
    place.takePath(paths, spot);
    place.takePhaseVoltages(openCircuit.spotVoltage, spot);
    largestFaults(place, phases[spot]!, faults, spot);
  }
  return faults;
}
