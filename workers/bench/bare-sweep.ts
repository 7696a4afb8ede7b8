import { complexArray, type ComplexArray } from '../engine/complex.ts';
import { faultArrays, type FaultArrays } from '../engine/fault-currents.ts';

/*
 * The least that a radial network can cost: two passes and the faults over arrays that lie in tree order already, nothing
 * checked, nothing allocated, no loops. Only for comparison; the engine's own sweep is engine/tree-sweep.ts.
 */

export type BareNetwork = { series: ComplexArray; shunts: ComplexArray; y: ComplexArray; z: ComplexArray };

export type BareTree = {
  parent: Int32Array;
  /** Positive, negative, zero. */
  networks: [BareNetwork, BareNetwork, BareNetwork];
  faults: FaultArrays;
};

export function bareTree(
  parent: Int32Array,
  series: readonly ComplexArray[],
  shunts: readonly ComplexArray[],
): BareTree {
  const networks = series.map((each, index) => ({
    series: each,
    shunts: shunts[index]!,
    y: complexArray(parent.length),
    z: complexArray(parent.length),
  }));
  return { parent, networks: networks as BareTree['networks'], faults: faultArrays(parent.length) };
}

/** Sweeps all three networks and computes the four faults at every bus, with one per unit before the fault. */
export function sweepBareTree({ parent, networks, faults }: BareTree): void {
  for (const network of networks) sweepNetwork(parent, network);
  computeFaults(networks[0].z, networks[1].z, networks[2].z, faults);
}

function sweepNetwork(parent: Int32Array, { series, shunts, y, z }: BareNetwork): void {
  y.re.set(shunts.re);
  y.im.set(shunts.im);
  const { re: yRe, im: yIm } = y;
  const { re: sRe, im: sIm } = series;
  const { re: zRe, im: zIm } = z;
  for (let bus = parent.length - 1; bus > 0; bus--) {
    const p = parent[bus]!;
    const re = yRe[bus]!;
    const im = yIm[bus]!;
    const dRe = 1 + sRe[bus]! * re - sIm[bus]! * im;
    const dIm = sRe[bus]! * im + sIm[bus]! * re;
    const inverse = 1 / (dRe * dRe + dIm * dIm);
    const tRe = dRe * inverse;
    const tIm = -dIm * inverse;
    yRe[p]! += re * tRe - im * tIm;
    yIm[p]! += re * tIm + im * tRe;
    yRe[bus] = tRe;
    yIm[bus] = tIm;
  }
  const square = yRe[0]! ** 2 + yIm[0]! ** 2;
  zRe[0] = yRe[0]! / square;
  zIm[0] = -yIm[0]! / square;
  for (let bus = 1; bus < parent.length; bus++) {
    const p = parent[bus]!;
    const tRe = yRe[bus]!;
    const tIm = yIm[bus]!;
    const sumRe = sRe[bus]! + tRe * zRe[p]! - tIm * zIm[p]!;
    const sumIm = sIm[bus]! + tRe * zIm[p]! + tIm * zRe[p]!;
    zRe[bus] = tRe * sumRe - tIm * sumIm;
    zIm[bus] = tRe * sumIm + tIm * sumRe;
  }
}

function computeFaults(
  { re: r1s, im: x1s }: ComplexArray,
  { re: r2s, im: x2s }: ComplexArray,
  { re: r0s, im: x0s }: ComplexArray,
  { threePhase, lineGround, lineLine, lineLineGround, lineLineGroundEarth }: FaultArrays,
): void {
  const root3 = Math.sqrt(3);
  for (let bus = 0; bus < threePhase.length; bus++) {
    const [r1, x1, r2, x2, r0, x0] = [r1s[bus]!, x1s[bus]!, r2s[bus]!, x2s[bus]!, r0s[bus]!, x0s[bus]!];
    const r12 = r1 + r2;
    const x12 = x1 + x2;
    const dRe = r1 * r2 - x1 * x2 + r0 * r12 - x0 * x12;
    const dIm = r1 * x2 + x1 * r2 + r0 * x12 + x0 * r12;
    const factor = Math.sqrt(3 / (dRe * dRe + dIm * dIm));
    const square2 = r2 * r2 + x2 * x2;
    const turned = r0 * r2 + x0 * x2 + root3 * Math.abs(x0 * r2 - r0 * x2);
    threePhase[bus] = 1 / Math.sqrt(r1 * r1 + x1 * x1);
    lineLine[bus] = root3 / Math.sqrt(r12 * r12 + x12 * x12);
    lineGround[bus] = 3 / Math.sqrt((r12 + r0) ** 2 + (x12 + x0) ** 2);
    lineLineGround[bus] = factor * Math.sqrt(r0 * r0 + x0 * x0 + square2 + turned);
    lineLineGroundEarth[bus] = factor * root3 * Math.sqrt(square2);
  }
}
