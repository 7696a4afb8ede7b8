import type { Grounding } from '../../shared/schemas/study-result.ts';
import type { Complex } from './complex.ts';
import { add, divide, magnitude, multiply, scale, sum } from './complex.ts';
import { phasesOf } from './open-circuit.ts';

/*
 * How far the healthy phases rise in a fault to ground (IEEE C62.92.1: the coefficient of grounding is that voltage as a
 * share of line to line; value from memory). One volt per unit is behind Z1; there is no inverter current.
 */

const unity: Complex = { re: 1, im: 0 };

/**
 * Judges a place by its Thevenin impedances, all to one base.
 * Example: Z1 = Z2 = j1, Z0 = j3 give X0/X1 = 3, R0/X1 = 0, 1.2857 per unit (two lines to ground) and 74.23 %.
 */
export function judgeGrounding(z1: Complex, z2: Complex, z0: Complex | null): Grounding {
  if (!z0) return { x0x1: null, r0x1: null, healthyPhasePu: Math.sqrt(3), cogPercent: 100 };
  const { lineGround, lineLineGround } = findHealthyPhases(z1, z2, z0);
  const healthyPhasePu = Math.max(lineGround, lineLineGround);
  return {
    x0x1: z0.im / z1.im,
    r0x1: z0.re / z1.im,
    healthyPhasePu,
    cogPercent: (healthyPhasePu / Math.sqrt(3)) * 100,
  };
}

/**
 * Gives the largest healthy-phase voltage of each fault, per unit of line to neutral.
 * Phase a to ground: I = 1/(Z0 + Z1 + Z2), so V1 = 1 − Z1·I, V2 = −Z2·I, V0 = −Z0·I.
 * Phases b and c to ground: V1 = V2 = V0 = Zp/(Z1 + Zp) with Zp = Z2·Z0/(Z2 + Z0), and Va = 3·V1.
 * An open zero sequence is the limit of both: √3 and 3·Z2/(Z1 + Z2).
 */
export function findHealthyPhases(
  z1: Complex,
  z2: Complex,
  z0: Complex | null,
): { lineGround: number; lineLineGround: number } {
  if (!z0) {
    return { lineGround: Math.sqrt(3), lineLineGround: magnitude(divide(scale(z2, 3), add(z1, z2))) };
  }
  const current = divide(unity, sum(z0, z1, z2));
  const fallen = (z: Complex) => scale(multiply(z, current), -1);
  const [, b, c] = phasesOf(add(unity, fallen(z1)), fallen(z2), fallen(z0));
  const parallel = divide(multiply(z2, z0), add(z2, z0));
  return {
    lineGround: Math.max(magnitude(b), magnitude(c)),
    lineLineGround: magnitude(scale(divide(parallel, add(z1, parallel)), 3)),
  };
}
