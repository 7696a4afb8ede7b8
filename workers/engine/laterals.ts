import type { Model, PhaseTriple } from './case.ts';
import type { ComplexArray } from './complex.ts';
import { a, a2, addAt, at, complexArray } from './complex.ts';
import type { Topology } from './topology.ts';
import { wiringOf } from './wiring.ts';

/*
 * Laterals are trees, and a spot's phases are phases of every segment between it and the tap. So the path to a spot
 * adds one self and one mutual impedance per segment, and the currents of its inverters are swept from the leaves in.
 */

export type PhaseArrays = readonly [ComplexArray, ComplexArray, ComplexArray];

export type LateralPaths = { readonly self: ComplexArray; readonly mutual: ComplexArray };

/** Adds up the impedance between the tap and each spot. */
export function addUpPaths(model: Model, { laterals }: Topology): LateralPaths {
  const { selfRe, selfIm, mutualRe, mutualIm } = wiringOf(model);
  const count = laterals.tap.length;
  const self = complexArray(count);
  const mutual = complexArray(count);
  for (let spot = 0; spot < count; spot++) {
    const parent = laterals.parent[spot]!;
    if (parent !== -1) {
      for (const path of [self, mutual]) {
        path.re[spot] = path.re[parent]!;
        path.im[spot] = path.im[parent]!;
      }
    }
    const branch = laterals.branch[spot]!;
    if (branch === -1) continue;
    self.re[spot]! += selfRe[branch]!;
    self.im[spot]! += selfIm[branch]!;
    mutual.re[spot]! += mutualRe[branch]!;
    mutual.im[spot]! += mutualIm[branch]!;
  }
  return { self, mutual };
}

export function phaseArrays(count: number): PhaseArrays {
  return [complexArray(count), complexArray(count), complexArray(count)];
}

export function phasesAt(arrays: PhaseArrays, index: number): PhaseTriple {
  return [at(arrays[0], index), at(arrays[1], index), at(arrays[2], index)];
}

export function addPhasesAt(arrays: PhaseArrays, index: number, values: PhaseTriple): void {
  addAt(arrays[0], index, values[0]);
  addAt(arrays[1], index, values[1]);
  addAt(arrays[2], index, values[2]);
}

/** Turns what is sent out at each spot into what flows from it towards the tap, and gives the taps their share. */
export function sweepCurrentsToTaps(
  { laterals }: Topology,
  flow: PhaseArrays,
  giveToTap: (bus: number, currents: PhaseTriple) => void,
): void {
  for (let spot = laterals.tap.length - 1; spot >= 0; spot--) {
    const currents = phasesAt(flow, spot);
    if (currents.every(({ re, im }) => re === 0 && im === 0)) continue;
    const parent = laterals.parent[spot]!;
    if (parent === -1) giveToTap(laterals.tap[spot]!, currents);
    else addPhasesAt(flow, parent, currents);
  }
}

/** Gives the voltage of each spot: the tap's, raised along the path by self·I + mutual·(currents of the other phases). */
export function sweepVoltagesFromTaps(
  model: Model,
  { laterals }: Topology,
  flow: PhaseArrays,
  atBus: { v1: ComplexArray; v2: ComplexArray; v0: ComplexArray },
): PhaseArrays {
  const voltage = phaseArrays(laterals.tap.length);
  for (let spot = 0; spot < laterals.tap.length; spot++) {
    const parent = laterals.parent[spot]!;
    const branch = laterals.branch[spot]!;
    for (let phase = 0; phase < 3; phase++) {
      const { re, im } = voltage[phase]!;
      if (parent === -1) takePhaseOfTap(spot, phase, laterals.tap[spot]!);
      else {
        re[spot] = re[parent]!;
        im[spot] = im[parent]!;
      }
      if (branch !== -1) addRise(spot, phase, branch);
    }
  }
  return voltage;

  /** V0 + a^(−phase)·V1 + a^phase·V2, as `phasesOf` in open-circuit.ts. */
  function takePhaseOfTap(spot: number, phase: number, bus: number): void {
    const { v1, v2, v0 } = atBus;
    const turn1 = phase === 0 ? unity : phase === 1 ? a2 : a;
    const turn2 = phase === 0 ? unity : phase === 1 ? a : a2;
    const [re1, im1, re2, im2] = [v1.re[bus]!, v1.im[bus]!, v2.re[bus]!, v2.im[bus]!];
    voltage[phase]!.re[spot] =
      v0.re[bus]! + turn1.re * re1 - turn1.im * im1 + turn2.re * re2 - turn2.im * im2;
    voltage[phase]!.im[spot] =
      v0.im[bus]! + turn1.re * im1 + turn1.im * re1 + turn2.re * im2 + turn2.im * re2;
  }

  function addRise(spot: number, phase: number, branch: number): void {
    const { selfRe, selfIm, mutualRe, mutualIm } = wiringOf(model);
    for (let other = 0; other < 3; other++) {
      const zRe = (other === phase ? selfRe : mutualRe)[branch]!;
      const zIm = (other === phase ? selfIm : mutualIm)[branch]!;
      const iRe = flow[other]!.re[spot]!;
      const iIm = flow[other]!.im[spot]!;
      voltage[phase]!.re[spot]! += zRe * iRe - zIm * iIm;
      voltage[phase]!.im[spot]! += zRe * iIm + zIm * iRe;
    }
  }
}

const unity = { re: 1, im: 0 };
