import { describe, expect, it } from 'vitest';
import { asymmetryFactor, kappa, largestXr, peakFactor, ratioOf } from '../../../workers/engine/asymmetry.ts';

describe('The asymmetry of the first cycle', () => {
  // Computed from √(1 + 2·e^(−2π/(X/R))), the formula of IEEE C37.010 and C37.41 (from memory).
  it.each([
    [4, 1.1899],
    [5, 1.2527],
    [6, 1.3045],
    [8, 1.3827],
    [10, 1.4377],
    [12, 1.4781],
    [15, 1.5217],
    [17, 1.5434],
    [20, 1.5687],
    [25, 1.5986],
  ])('at X/R %d multiplies the symmetrical current by %d', (xr, factor) => {
    expect(Math.abs(asymmetryFactor(xr) - factor)).toBeLessThanOrEqual(5e-5);
  });

  // Cutouts of IEEE C37.42: asymmetrical and symmetrical kA at the test X/R (values from memory); each pair agrees
  // with the formula within 3.5 %.
  it.each([
    [8, 5.6, 8],
    [10, 7.1, 8],
    [16, 10.6, 12],
    [12, 8.0, 15],
    [20, 13.2, 15],
  ])('makes the %d kA asymmetrical rating of a cutout out of %d kA at X/R %d', (total, symmetrical, xr) => {
    const computed = symmetrical * asymmetryFactor(xr);
    expect(Math.abs(computed / total - 1)).toBeLessThanOrEqual(0.035);
  });

  it.each([
    [15, 2.5612],
    [17, 2.5898],
  ])('peaks at X/R %d at %d times the symmetrical current', (xr, factor) => {
    expect(Math.abs(peakFactor(xr) - factor)).toBeLessThanOrEqual(5e-5);
  });

  it('fades cycle by cycle, and stays between 1 and √3, its peak between √2 and 2·√2', () => {
    expect(asymmetryFactor(17, 2)).toBeLessThan(asymmetryFactor(17));
    expect(asymmetryFactor(0)).toBe(1);
    expect(peakFactor(0)).toBe(Math.SQRT2);
    expect(asymmetryFactor(largestXr)).toBeCloseTo(Math.sqrt(3), 3);
    expect(peakFactor(largestXr)).toBeCloseTo(2 * Math.SQRT2, 3);
  });

  // IEC 60909-0: κ = 1.02 + 0.98·e^(−3R/X) (value from memory); e^(−0.3) = 0.740818.
  it('has by IEC 60909-0 a κ from 1.02 to 2', () => {
    expect(kappa(10)).toBeCloseTo(1.02 + 0.98 * 0.740818, 5);
    expect(kappa(0)).toBe(1.02);
    expect(kappa(largestXr)).toBeCloseTo(2, 3);
  });

  it('knows no X/R beyond its bound, and none below 0', () => {
    expect(ratioOf({ re: 0, im: 1 })).toBe(largestXr);
    expect(ratioOf({ re: 0.5, im: 1 })).toBe(2);
    expect(ratioOf({ re: 1, im: -1 })).toBe(0);
  });
});
