import type { Impedance, Neutral } from '../../shared/schemas/study.ts';
import { allPhases, phaseA, phaseB, phaseC } from './case.ts';
import type { Complex } from './complex.ts';
import { scale, zero } from './complex.ts';

/*
 * Per unit: Zbase = kV²/MVA in ohms, Ibase = MVA·1000/(√3·kV) in A
 * (J. J. Grainger, W. D. Stevenson, Power System Analysis, 1.10–1.11; value from memory).
 */

/** Ohms in one per unit. */
export function baseOhms(baseMva: number, kv: number): number {
  return (kv * kv) / baseMva;
}

/** Amperes in one per unit; 10 MVA at 12.47 kV: 463.0 A. */
export function baseAmps(baseMva: number, kv: number): number {
  return (baseMva * 1000) / (Math.sqrt(3) * kv);
}

/** Reads "AC" as a set of bits. */
export function phaseSet(phases: string): number {
  if (phases === 'ABC') return allPhases;
  return (
    (phases.includes('A') ? phaseA : 0) |
    (phases.includes('B') ? phaseB : 0) |
    (phases.includes('C') ? phaseC : 0)
  );
}

/** An impedance in ohms over one per unit's ohms. */
export function perUnit(ohms: Impedance, base: number): Complex {
  return { re: ohms.r / base, im: ohms.x / base };
}

/** Gives 3·Zn in per unit, what a neutral adds to a zero-sequence path, or null where the neutral is not earthed. */
export function earthing(neutral: Neutral | undefined, ohms: number): Complex | null {
  if (neutral === 'ungrounded') return null;
  if (neutral === undefined || neutral === 'solid') return zero;
  return scale(perUnit(neutral, ohms), 3);
}
