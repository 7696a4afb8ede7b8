import { allPhases } from './case.ts';
import type { ComplexArray } from './complex.ts';
import type { FaultArrays } from './fault-currents.ts';
import type { LateralPaths, PhaseArrays } from './laterals.ts';

/* Faults at one place with any voltages before the fault, without an object per place; formulas as in faults.ts. */

const half = Math.sqrt(3) / 2;

/** Works for one place after the other on the same few numbers. */
class FaultPlace {
  /** Sums that all phases share: Zpp = (Z0 + Z1 + Z2)/3 + self, Zpq, Zqp, and the loop of two lines. */
  readonly z = new Float64Array(16);
  hasZero = false;
  readonly vRe = new Float64Array(3);
  readonly vIm = new Float64Array(3);

  /** Reads Z1, Z2 and Z0 at a bus; `zero` is null where the zero sequence is open. */
  takeImpedances(
    positive: ComplexArray,
    negative: ComplexArray,
    zero: ComplexArray | null,
    bus: number,
  ): void {
    const { z } = this;
    this.hasZero = zero !== null;
    z[0] = positive.re[bus]!;
    z[1] = positive.im[bus]!;
    z[2] = negative.re[bus]!;
    z[3] = negative.im[bus]!;
    z[4] = zero ? zero.re[bus]! : 0;
    z[5] = zero ? zero.im[bus]! : 0;
    z[6] = z[7] = z[8] = z[9] = 0;
  }

  takePath({ self, mutual }: LateralPaths, spot: number): void {
    const { z } = this;
    z[6] = self.re[spot]!;
    z[7] = self.im[spot]!;
    z[8] = mutual.re[spot]!;
    z[9] = mutual.im[spot]!;
  }

  takePhaseVoltages(voltage: PhaseArrays, spot: number): void {
    for (let phase = 0; phase < 3; phase++) {
      this.vRe[phase] = voltage[phase]!.re[spot]!;
      this.vIm[phase] = voltage[phase]!.im[spot]!;
    }
  }

  takeSequenceVoltages(v1: ComplexArray, v2: ComplexArray, v0: ComplexArray, bus: number): void {
    this.takePhases(v1.re[bus]!, v1.im[bus]!, v2.re[bus]!, v2.im[bus]!, v0.re[bus]!, v0.im[bus]!);
  }

  /** Va = V0 + V1 + V2, Vb = V0 + a²·V1 + a·V2, Vc = V0 + a·V1 + a²·V2. */
  takePhases(re1: number, im1: number, re2: number, im2: number, re0: number, im0: number): void {
    const { vRe, vIm } = this;
    const meanRe = re0 - (re1 + re2) / 2;
    const meanIm = im0 - (im1 + im2) / 2;
    const turnRe = half * (im1 - im2);
    const turnIm = half * (re1 - re2);
    vRe[0] = re0 + re1 + re2;
    vIm[0] = im0 + im1 + im2;
    vRe[1] = meanRe + turnRe;
    vIm[1] = meanIm - turnIm;
    vRe[2] = meanRe - turnRe;
    vIm[2] = meanIm + turnIm;
  }
}

export function faultPlace(): FaultPlace {
  return new FaultPlace();
}

/** Writes the largest currents of a place with these phases; kinds of faults that it has no phases for stay 0. */
export function largestFaults(place: FaultPlace, phases: number, faults: FaultArrays, index: number): void {
  if (place.hasZero) faults.lineGround[index] = largestLineGround(place, phases);
  largestOfTwoLines(place, phases, faults, index);
  // Last, since it takes the place of the voltages.
  if (phases === allPhases) faults.threePhase[index] = largestThreePhase(place);
}

function largestLineGround({ z, vRe, vIm }: FaultPlace, phases: number): number {
  let square = 0;
  for (let p = 0; p < 3; p++) {
    if (phases & (1 << p)) square = Math.max(square, vRe[p]! ** 2 + vIm[p]! ** 2);
  }
  const re = (z[0]! + z[2]! + z[4]!) / 3 + z[6]!;
  const im = (z[1]! + z[3]! + z[5]!) / 3 + z[7]!;
  return Math.sqrt(square / (re * re + im * im));
}

function largestOfTwoLines(place: FaultPlace, phases: number, faults: FaultArrays, index: number): void {
  const { z, vRe, vIm, hasZero } = place;
  const [r1, x1, r2, x2, r0, x0] = [z[0]!, z[1]!, z[2]!, z[3]!, z[4]!, z[5]!];
  const [selfRe, selfIm, mutualRe, mutualIm] = [z[6]!, z[7]!, z[8]!, z[9]!];
  const loopRe = r1 + r2 + 2 * (selfRe - mutualRe);
  const loopIm = x1 + x2 + 2 * (selfIm - mutualIm);
  const ppRe = (r0 + r1 + r2) / 3 + selfRe;
  const ppIm = (x0 + x1 + x2) / 3 + selfIm;
  // Zpq and Zqp are their mean plus and minus (a − a²)·(Z1 − Z2)/6.
  const meanRe = (r0 - (r1 + r2) / 2) / 3 + mutualRe;
  const meanIm = (x0 - (x1 + x2) / 2) / 3 + mutualIm;
  const turnRe = (-half * (x1 - x2)) / 3;
  const turnIm = (half * (r1 - r2)) / 3;
  const pqRe = meanRe + turnRe;
  const pqIm = meanIm + turnIm;
  const qpRe = meanRe - turnRe;
  const qpIm = meanIm - turnIm;
  const dRe = ppRe * ppRe - ppIm * ppIm - (pqRe * qpRe - pqIm * qpIm);
  const dIm = 2 * ppRe * ppIm - (pqRe * qpIm + pqIm * qpRe);
  const dSquare = dRe * dRe + dIm * dIm;
  const loopSquare = loopRe * loopRe + loopIm * loopIm;
  let lineLine = 0;
  let lineLineGround = 0;
  let earth = 0;
  for (let p = 0; p < 3; p++) {
    const q = p === 2 ? 0 : p + 1;
    if (!(phases & (1 << p)) || !(phases & (1 << q))) continue;
    const [vpRe, vpIm, vqRe, vqIm] = [vRe[p]!, vIm[p]!, vRe[q]!, vIm[q]!];
    const pair = ((vpRe - vqRe) ** 2 + (vpIm - vqIm) ** 2) / loopSquare;
    lineLine = Math.max(lineLine, pair);
    const ipRe = ppRe * vpRe - ppIm * vpIm - (pqRe * vqRe - pqIm * vqIm);
    const ipIm = ppRe * vpIm + ppIm * vpRe - (pqRe * vqIm + pqIm * vqRe);
    const iqRe = ppRe * vqRe - ppIm * vqIm - (qpRe * vpRe - qpIm * vpIm);
    const iqIm = ppRe * vqIm + ppIm * vqRe - (qpRe * vpIm + qpIm * vpRe);
    const largest = Math.max(ipRe * ipRe + ipIm * ipIm, iqRe * iqRe + iqIm * iqIm) / dSquare;
    if (largest <= lineLineGround) continue;
    lineLineGround = largest;
    // The earth current that goes with the worst pair of phases, which need not be the largest of its own kind.
    earth = ((ipRe + iqRe) ** 2 + (ipIm + iqIm) ** 2) / dSquare;
  }
  faults.lineLine[index] = Math.sqrt(lineLine);
  faults.lineLineGround[index] = Math.sqrt(hasZero ? lineLineGround : lineLine);
  faults.lineLineGroundEarth[index] = hasZero ? Math.sqrt(earth) : 0;
}

/** I(s) = V(s)/Z(s) in each sequence. */
function largestThreePhase(place: FaultPlace): number {
  const { z, vRe, vIm, hasZero } = place;
  const [aRe, aIm] = [vRe[0]!, vIm[0]!];
  const sumRe = vRe[1]! + vRe[2]!;
  const sumIm = vIm[1]! + vIm[2]!;
  const turnRe = half * (vRe[1]! - vRe[2]!);
  const turnIm = half * (vIm[1]! - vIm[2]!);
  // V1 = (Va + a·Vb + a²·Vc)/3, V2 = (Va + a²·Vb + a·Vc)/3, V0 = (Va + Vb + Vc)/3.
  const v1Re = (aRe - sumRe / 2 - turnIm) / 3;
  const v1Im = (aIm - sumIm / 2 + turnRe) / 3;
  const v2Re = (aRe - sumRe / 2 + turnIm) / 3;
  const v2Im = (aIm - sumIm / 2 - turnRe) / 3;
  const v0Re = (aRe + sumRe) / 3;
  const v0Im = (aIm + sumIm) / 3;
  const square1 = z[0]! ** 2 + z[1]! ** 2;
  const square2 = z[2]! ** 2 + z[3]! ** 2;
  const square0 = hasZero ? z[4]! ** 2 + z[5]! ** 2 : Infinity;
  place.takePhases(
    (v1Re * z[0]! + v1Im * z[1]!) / square1,
    (v1Im * z[0]! - v1Re * z[1]!) / square1,
    (v2Re * z[2]! + v2Im * z[3]!) / square2,
    (v2Im * z[2]! - v2Re * z[3]!) / square2,
    (v0Re * z[4]! + v0Im * z[5]!) / square0,
    (v0Im * z[4]! - v0Re * z[5]!) / square0,
  );
  let largest = 0;
  for (let p = 0; p < 3; p++) largest = Math.max(largest, vRe[p]! ** 2 + vIm[p]! ** 2);
  return Math.sqrt(largest);
}
