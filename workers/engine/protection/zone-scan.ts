import type { Complex, ComplexArray } from '../complex.ts';
import { branchAt } from '../model-parts.ts';
import type { SolvedCase } from '../solve-case.ts';
import { negativeTurn } from '../open-circuit.ts';
import type { BranchShares } from './branch-currents.ts';
import { prefaultIn } from './branch-currents.ts';

/*
 * The least current that a device sees for a fault at one of many places, in numbers alone: a zone has up to as many ends as
 * the feeder has nodes. branch-currents.ts does the same for one place, with phasors.
 */

/** Gives the least over the choices of phases at a node, per unit at the device; NaN where no source feeds the place. */
export type Scan = (node: number) => number;

/** 3I0 for a line-to-ground fault through `rf`: |d0·I + 3·P0| with I = Vp/((Z0 + Z1 + Z2)/3 + self + rf). */
export function makeGroundScan(solved: SolvedCase, shares: BranchShares, rf: (node: number) => number): Scan {
  const { paths, topology, openCircuit } = solved;
  const { positive, negative, zero } = solved.networks;
  const { d0 } = shares.shares!;
  const preZero = prefaultIn(solved, shares.branch, shares.end)[2];
  const place = makePlace(solved);
  return (node) => {
    const { bus, spot } = place.go(node);
    if (bus === -1 || !positive.hasPath[bus]) return NaN;
    if (!zero.hasPath[bus]) return 3 * Math.hypot(preZero.re, preZero.im);
    let re = (zero.z.re[bus]! + positive.z.re[bus]! + negative.z.re[bus]!) / 3 + rf(node);
    let im = (zero.z.im[bus]! + positive.z.im[bus]! + negative.z.im[bus]!) / 3;
    if (spot !== -1) {
      re += paths.self.re[spot]!;
      im += paths.self.im[spot]!;
    }
    // d0 over the impedance of the loop.
    const square = re * re + im * im;
    const perVoltRe = (d0.re[bus]! * re + d0.im[bus]! * im) / square;
    const perVoltIm = (d0.im[bus]! * re - d0.re[bus]! * im) / square;
    const phases = spot === -1 ? (openCircuit.balanced ? 1 : 7) : topology.laterals.phases[spot]!;
    let least = Infinity;
    for (let p = 0; p < 3; p++) {
      if (!(phases & (1 << p))) continue;
      const vRe = place.re[p]!;
      const vIm = place.im[p]!;
      const iRe = perVoltRe * vRe - perVoltIm * vIm + 3 * preZero.re;
      const iIm = perVoltRe * vIm + perVoltIm * vRe + 3 * preZero.im;
      least = Math.min(least, iRe * iRe + iIm * iIm);
    }
    return Math.sqrt(least);
  };
}

const root = Math.sqrt(3) / 2;

/* By pair AB, BC, CA: I1 and I2 for I = 1 in the first phase and back in the second: (1 − a)/3, (1 − a²)/3 and turned. */
const ofPair1: readonly Complex[] = [
  { re: 0.5, im: -root / 3 },
  { re: 0, im: (2 * root) / 3 },
  { re: -0.5, im: -root / 3 },
];
const ofPair2: readonly Complex[] = [
  { re: 0.5, im: root / 3 },
  { re: 0, im: (-2 * root) / 3 },
  { re: -0.5, im: root / 3 },
];

/** The largest phase current for a line-to-line fault, I = (Vp − Vq)/(Z1 + Z2 + 2·(self − mutual)). */
export function makePhaseScan(solved: SolvedCase, shares: BranchShares): Scan {
  const { paths, topology, openCircuit, model } = solved;
  const { positive, negative } = solved.networks;
  const { d1, d2 } = shares.shares!;
  const [pre1, pre2, pre0] = prefaultIn(solved, shares.branch, shares.end);
  const { clockHours, busOf } = topology;
  const hoursAtEnd = clockHours[busOf[branchAt(model, shares.branch)[shares.end]]!]!;
  const place = makePlace(solved);
  return (node) => {
    const { bus, spot } = place.go(node);
    if (bus === -1 || !positive.hasPath[bus]) return NaN;
    let re = positive.z.re[bus]! + negative.z.re[bus]!;
    let im = positive.z.im[bus]! + negative.z.im[bus]!;
    if (spot !== -1) {
      re += 2 * (paths.self.re[spot]! - paths.mutual.re[spot]!);
      im += 2 * (paths.self.im[spot]! - paths.mutual.im[spot]!);
    }
    const square = re * re + im * im;
    const turn = negativeTurn(clockHours[bus]! - hoursAtEnd);
    const phases = spot === -1 ? 7 : topology.laterals.phases[spot]!;
    const pairs = spot === -1 && openCircuit.balanced ? 1 : 3;
    let least = Infinity;
    for (let p = 0; p < pairs; p++) {
      const q = (p + 1) % 3;
      if (!(phases & (1 << p)) || !(phases & (1 << q))) continue;
      const vRe = place.re[p]! - place.re[q]!;
      const vIm = place.im[p]! - place.im[q]!;
      const iRe = (vRe * re + vIm * im) / square;
      const iIm = (vIm * re - vRe * im) / square;
      const w1 = ofPair1[p]!;
      const w2 = ofPair2[p]!;
      const i1Re = w1.re * iRe - w1.im * iIm;
      const i1Im = w1.re * iIm + w1.im * iRe;
      const t2Re = w2.re * turn.re - w2.im * turn.im;
      const t2Im = w2.re * turn.im + w2.im * turn.re;
      const i2Re = t2Re * iRe - t2Im * iIm;
      const i2Im = t2Re * iIm + t2Im * iRe;
      const j1Re = d1.re[bus]! * i1Re - d1.im[bus]! * i1Im + pre1.re;
      const j1Im = d1.re[bus]! * i1Im + d1.im[bus]! * i1Re + pre1.im;
      const j2Re = d2.re[bus]! * i2Re - d2.im[bus]! * i2Im + pre2.re;
      const j2Im = d2.re[bus]! * i2Im + d2.im[bus]! * i2Re + pre2.im;
      least = Math.min(least, largestSquare(j1Re, j1Im, j2Re, j2Im, pre0.re, pre0.im));
    }
    return Math.sqrt(least);
  };
}

/** The square of the largest of |I0 + I1 + I2|, |I0 + a²·I1 + a·I2| and |I0 + a·I1 + a²·I2|. */
function largestSquare(re1: number, im1: number, re2: number, im2: number, re0: number, im0: number): number {
  const sumRe = re1 + re2;
  const sumIm = im1 + im2;
  const acrossRe = root * (im1 - im2);
  const acrossIm = root * (re2 - re1);
  const aRe = re0 + sumRe;
  const aIm = im0 + sumIm;
  const bRe = re0 - 0.5 * sumRe + acrossRe;
  const bIm = im0 - 0.5 * sumIm + acrossIm;
  const cRe = re0 - 0.5 * sumRe - acrossRe;
  const cIm = im0 - 0.5 * sumIm - acrossIm;
  return Math.max(aRe * aRe + aIm * aIm, bRe * bRe + bIm * bIm, cRe * cRe + cIm * cIm);
}

/** Goes to a node: its bus or tap, its spot, and its phase voltages before the fault. */
function makePlace({ topology, openCircuit }: SolvedCase) {
  const { busOf, laterals } = topology;
  const { v1, v2, v0, spotVoltage } = openCircuit;
  const place = {
    bus: -1,
    spot: -1,
    re: new Float64Array(3),
    im: new Float64Array(3),
    go(node: number) {
      const spot = (place.spot = laterals.spotOf[node]!);
      const bus = (place.bus = spot === -1 ? busOf[node]! : laterals.tap[spot]!);
      if (spot !== -1) takeSpot(spotVoltage, spot);
      else if (bus !== -1) takeBus(bus);
      return place;
    },
  };
  return place;

  function takeSpot(voltage: readonly ComplexArray[], spot: number): void {
    for (let p = 0; p < 3; p++) {
      place.re[p] = voltage[p]!.re[spot]!;
      place.im[p] = voltage[p]!.im[spot]!;
    }
  }

  function takeBus(bus: number): void {
    const sumRe = v1.re[bus]! + v2.re[bus]!;
    const sumIm = v1.im[bus]! + v2.im[bus]!;
    const acrossRe = root * (v1.im[bus]! - v2.im[bus]!);
    const acrossIm = root * (v2.re[bus]! - v1.re[bus]!);
    place.re[0] = v0.re[bus]! + sumRe;
    place.im[0] = v0.im[bus]! + sumIm;
    place.re[1] = v0.re[bus]! - 0.5 * sumRe + acrossRe;
    place.im[1] = v0.im[bus]! - 0.5 * sumIm + acrossIm;
    place.re[2] = v0.re[bus]! - 0.5 * sumRe - acrossRe;
    place.im[2] = v0.im[bus]! - 0.5 * sumIm - acrossIm;
  }
}
