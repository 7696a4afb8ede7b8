import type { Complex } from '../complex.ts';
import { magnitude } from '../complex.ts';

/*
 * A generator behind one impedance: all per unit of the place's nominal voltage and one base, P and Q into the grid.
 * From V·conj(I) = P + jQ and V − Z·I = E: V⁴ − (E² + 2·a)·V² + a² + b² = 0 with a = R·P + X·Q and b = X·P − R·Q.
 */

/**
 * Gives the voltage with the generator for E without it; undefined where there is none, the grid being too weak.
 * 12.47 kV, 1.2 + j2.4 Ω and 2 MW: 1.01475 for E = 1.
 */
export function solveTwoNode(z: Complex, p: number, q: number, e = 1): number | undefined {
  const along = z.re * p + z.im * q;
  const across = z.im * p - z.re * q;
  const half = (e * e) / 2 + along;
  const root = half * half - along * along - across * across;
  if (root < 0 || half < 0) return undefined;
  return Math.sqrt(half + Math.sqrt(root));
}

/** Estimates the same change, as a share: ΔS/Ssc·cos(ψ − φ) with ψ = atan(X/R) and φ = atan(Q/P). */
export function estimateChange(z: Complex, p: number, q: number): number {
  const angle = Math.atan2(z.im, z.re) - Math.atan2(q, p);
  return Math.hypot(p, q) * magnitude(z) * Math.cos(angle);
}
