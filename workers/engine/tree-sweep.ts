import type { ComplexArray } from './complex.ts';

/*
 * Trees in two passes, exactly, with shunts anywhere. A bus b hangs from its parent p by z; Y is what stands behind b, its own
 * shunts included. From the leaves in, with the share t = 1/(1 + z·Y) of p's voltage that b sees:
 *   Y_p += Y·t.
 * From the mesh out:  Z_bp = t·Z_pp,  Z_bb = t·(z + t·Z_pp).
 * This is elimination in tree order (pivot (1 + z·Y)/z) and Takahashi's recurrence, in a form that neither divides by z nor
 * subtracts what is nearly equal; without shunts behind b, t is 1 and Z simply adds up.
 */

export type Trees = {
  /** By bus, smaller than the bus itself; -1 in the mesh, and where a bus has no branch towards it. */
  readonly parent: Int32Array;
  /** By bus: impedance of the branch to the parent. */
  readonly series: ComplexArray;
  /** Buses before this one are the mesh's. */
  readonly meshCount: number;
};

/* What counts as vanished beside the terms it is made of, and what then stands for it: half the digits are lost nearby. */
export const vanishing = 1e-11;
export const replacement = 1e-8;

/**
 * Leaves to mesh. `shares` comes in as the shunt admittance of each bus, and goes out as its share t; in the mesh, and where
 * a bus has no parent, as the admittance of all behind it. `fed` comes in as 1 where a shunt stands and goes out as 1 where
 * one stands anywhere behind. Adds to `meshScale` the size of what each bus of the mesh is given, to `weakBuses` where a
 * share cannot be told.
 */
export function sweepTowardsMesh(
  { parent, series, meshCount }: Trees,
  shares: ComplexArray,
  fed: Uint8Array,
  meshScale: Float64Array,
  weakBuses: number[],
): void {
  const { re: tRe, im: tIm } = shares;
  const { re: zRe, im: zIm } = series;
  for (let bus = parent.length - 1; bus >= meshCount; bus--) {
    const p = parent[bus]!;
    if (p < 0) continue;
    if (fed[bus] === 0) {
      tRe[bus] = 1;
      continue;
    }
    const yRe = tRe[bus]!;
    const yIm = tIm[bus]!;
    const productRe = zRe[bus]! * yRe - zIm[bus]! * yIm;
    const productIm = zRe[bus]! * yIm + zIm[bus]! * yRe;
    let dRe = 1 + productRe;
    let dIm = productIm;
    const size = 1 + Math.abs(productRe) + Math.abs(productIm);
    if (Math.abs(dRe) + Math.abs(dIm) <= vanishing * size) {
      weakBuses.push(bus);
      dRe = replacement * size;
      dIm = 0;
    }
    const inverse = 1 / (dRe * dRe + dIm * dIm);
    const shareRe = dRe * inverse;
    const shareIm = -dIm * inverse;
    const givenRe = yRe * shareRe - yIm * shareIm;
    const givenIm = yRe * shareIm + yIm * shareRe;
    tRe[bus] = shareRe;
    tIm[bus] = shareIm;
    tRe[p]! += givenRe;
    tIm[p]! += givenIm;
    fed[p] = 1;
    if (p < meshCount) meshScale[p]! += Math.abs(givenRe) + Math.abs(givenIm);
  }
}

/**
 * Mesh to leaves. `z` comes in with the driving-point impedances of the mesh and goes out with those of all buses; `hasPath`
 * likewise, for whether current has a way to earth at all.
 */
export function sweepFromMesh(
  { parent, series, meshCount }: Trees,
  shares: ComplexArray,
  z: ComplexArray,
  hasPath: Uint8Array,
  weakBuses: number[],
): void {
  const { re: tRe, im: tIm } = shares;
  const { re: seriesRe, im: seriesIm } = series;
  const { re: zRe, im: zIm } = z;
  for (let bus = meshCount; bus < parent.length; bus++) {
    const p = parent[bus]!;
    const shareRe = tRe[bus]!;
    const shareIm = tIm[bus]!;
    if (p < 0) {
      takeAlone(bus);
      continue;
    }
    const throughRe = shareRe * zRe[p]! - shareIm * zIm[p]!;
    const throughIm = shareRe * zIm[p]! + shareIm * zRe[p]!;
    const sumRe = seriesRe[bus]! + throughRe;
    const sumIm = seriesIm[bus]! + throughIm;
    zRe[bus] = shareRe * sumRe - shareIm * sumIm;
    zIm[bus] = shareRe * sumIm + shareIm * sumRe;
    hasPath[bus] = hasPath[p]!;
    const size = Math.abs(throughRe) + Math.abs(throughIm);
    if (Math.abs(sumRe) + Math.abs(sumIm) > vanishing * size || hasPath[bus] === 0) continue;
    weakBuses.push(bus);
    zRe[bus] = replacement * size;
    zIm[bus] = 0;
  }

  /** A bus whose branch the sequence does not pass is fed by what stands behind it alone; its share is kept as 1/Y. */
  function takeAlone(bus: number): void {
    if (hasPath[bus] === 0) return;
    const square = tRe[bus]! ** 2 + tIm[bus]! ** 2;
    zRe[bus] = tRe[bus] = tRe[bus]! / square;
    zIm[bus] = tIm[bus] = -tIm[bus]! / square;
  }
}

/** Currents out of the buses, by bus, become what arrives at the mesh and where a bus stands alone: J_p += t·J. */
export function sweepCurrentsTowardsMesh(
  { parent, meshCount }: Trees,
  shares: ComplexArray,
  { re, im }: ComplexArray,
): void {
  const { re: tRe, im: tIm } = shares;
  for (let bus = parent.length - 1; bus >= meshCount; bus--) {
    const p = parent[bus]!;
    const jRe = re[bus]!;
    const jIm = im[bus]!;
    if (p < 0 || (jRe === 0 && jIm === 0)) continue;
    re[p]! += tRe[bus]! * jRe - tIm[bus]! * jIm;
    im[p]! += tRe[bus]! * jIm + tIm[bus]! * jRe;
  }
}

/** Those currents become voltages, from the mesh's own out: V = t·(V_p + z·J). */
export function sweepVoltagesFromMesh(
  { parent, series, meshCount }: Trees,
  shares: ComplexArray,
  { re, im }: ComplexArray,
): void {
  const { re: tRe, im: tIm } = shares;
  const { re: zRe, im: zIm } = series;
  for (let bus = meshCount; bus < parent.length; bus++) {
    const p = parent[bus]!;
    const jRe = re[bus]!;
    const jIm = im[bus]!;
    const isAlone = p < 0;
    const sumRe = isAlone ? jRe : re[p]! + zRe[bus]! * jRe - zIm[bus]! * jIm;
    const sumIm = isAlone ? jIm : im[p]! + zRe[bus]! * jIm + zIm[bus]! * jRe;
    re[bus] = tRe[bus]! * sumRe - tIm[bus]! * sumIm;
    im[bus] = tRe[bus]! * sumIm + tIm[bus]! * sumRe;
  }
}
