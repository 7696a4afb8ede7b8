import type { Complex } from '../complex.ts';

/** What is smaller than its scale by so much is what rounding leaves of nothing. */
const residue = 1e-10;

/** Gives a value, or each part of a complex one, as 0 where it is rounding of nothing at a scale. */
export function withoutResidue(value: number, scale?: number): number;
export function withoutResidue(value: Complex, scale?: number): Complex;
export function withoutResidue(value: number | Complex, scale = 1): number | Complex {
  const settle = (part: number) => (Math.abs(part) <= residue * scale ? 0 : part);
  return typeof value === 'number' ? settle(value) : { re: settle(value.re), im: settle(value.im) };
}
