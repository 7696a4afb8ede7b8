/*
 * What the direct current of a fault's first cycles adds to its symmetrical current, from X/R at the fault.
 * A resistance of zero is an X/R without bound, a reactance that is not positive leaves no direct current.
 */

/** Above this X/R nothing changes any more in four digits; stands for an X/R without bound. */
export const largestXr = 1e4;

/** Gives X/R, from 0 to `largestXr`. */
export function ratioOf({ re: r, im: x }: { re: number; im: number }): number {
  if (x <= 0) return 0;
  return r * largestXr <= x ? largestXr : x / r;
}

/**
 * Gives rms current with its direct current over symmetrical rms current, `cycles` after the fault began at the worst
 * moment: √(1 + 2·e^(−4π·cycles/(X/R))). Half a cycle after, that is √(1 + 2·e^(−2π/(X/R))), which ratings of fuses and
 * reclosers are tested against (IEEE C37.010, C37.41; common practice, formula reproduced in textbooks).
 * Example: X/R 15 gives 1.5217, X/R 17 gives 1.5434.
 */
export function asymmetryFactor(xr: number, cycles = 0.5): number {
  return xr <= 0 ? 1 : Math.sqrt(1 + 2 * Math.exp((-4 * Math.PI * cycles) / xr));
}

/**
 * Gives the first peak over symmetrical rms current: √2·(1 + e^(−π/(X/R))) (IEEE C37.13 and C37.010; common practice).
 * Example: X/R 15 gives 2.5612.
 */
export function peakFactor(xr: number): number {
  return xr <= 0 ? Math.SQRT2 : Math.SQRT2 * (1 + Math.exp(-Math.PI / xr));
}

/**
 * Gives κ = 1.02 + 0.98·e^(−3R/X), which makes the peak κ·√2·Ik'' (IEC 60909-0, equation for κ; value from memory).
 * Example: X/R 10 gives 1.7460.
 */
export function kappa(xr: number): number {
  return xr <= 0 ? 1.02 : 1.02 + 0.98 * Math.exp(-3 / xr);
}
