import { describe, expect, it } from 'vitest';
import type { InverterIsland } from '../../../../workers/engine/findings/inverter-island.ts';
import { findInverterVoltages } from '../../../../workers/engine/findings/inverter-island.ts';

/* IEEE C62.92.6 (method from memory): a current I of the positive sequence into Z1 = Z2 = Z_L, Z0 = Z_L/g beside ground sources. */

const alone: InverterIsland = {
  current: 0.3,
  load: 0.25,
  groundedShare: 1,
  holding: undefined,
  groundSources: null,
};

describe('An island of inverters', () => {
  it('with grounded load alone rises to I·Z_L and no further', () => {
    const { prefault, lineGround, lineLineGround } = findInverterVoltages(alone);
    for (const voltage of [prefault, lineGround, lineLineGround]) expect(voltage).toBeCloseTo(1.2, 12);
  });

  it('with load in delta and no ground source has an open zero sequence: √3 and 1.5 times I·Z_L', () => {
    const found = findInverterVoltages({ ...alone, groundedShare: 0 });
    expect(found.z0).toBeNull();
    expect(found.lineGround).toBeCloseTo(1.2 * Math.sqrt(3), 12);
    expect(found.lineLineGround).toBeCloseTo(1.8, 12);
    // The limit of ever less grounded load is the same.
    expect(findInverterVoltages({ ...alone, groundedShare: 1e-9 }).highest).toBeCloseTo(found.highest, 6);
  });

  it('beside a machine goes from the machine’s voltage to that of the inverters alone as the machine gets weaker', () => {
    const beside = (x: number) =>
      findInverterVoltages({ ...alone, holding: { z1: { re: 0, im: x }, z2: { re: 0, im: x }, e: 1.05 } });
    expect(beside(1e-6).prefault).toBeCloseTo(1.05, 5);
    expect(beside(1e6).prefault).toBeCloseTo(1.2, 5);
    const { prefault, z1 } = beside(2);
    // Z1 = 4 ∥ j2 = 0.8 + j1.6: the voltage less I·Z1 is what the machine brings, 1.05·|Z1/Zm|.
    expect(z1.re).toBeCloseTo(0.8, 12);
    expect(z1.im).toBeCloseTo(1.6, 12);
    expect(Math.hypot(prefault - 0.3 * 0.8, 0.3 * 1.6)).toBeCloseTo((1.05 * Math.hypot(0.8, 1.6)) / 2, 12);
  });
});
