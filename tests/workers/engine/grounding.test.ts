import { describe, expect, it } from 'vitest';
import { findHealthyPhases, judgeGrounding } from '../../../workers/engine/grounding.ts';

/*
 * Check values computed from the formulas of IEEE 142 and C62.92.1 (formulas from memory):
 * K = (Z0 − Z1)/(Z0 + 2·Z1), Vb = a² − K, Vc = a − K; Va = 3·Z0/(Z1 + 2·Z0). EFF = √3·COG.
 */
const table = [
  { z1: [0, 1], z0: [0, 2], lineGround: 1.1456, lineGroundCog: 66.14, twoLines: 1.2, twoLinesCog: 69.28 },
  { z1: [0, 1], z0: [0, 2.5], lineGround: 1.2019, lineGroundCog: 69.39, twoLines: 1.25, twoLinesCog: 72.17 },
  { z1: [0, 1], z0: [0, 3], lineGround: 1.249, lineGroundCog: 72.11, twoLines: 1.2857, twoLinesCog: 74.23 },
  { z1: [0, 1], z0: [1, 3], lineGround: 1.3473, lineGroundCog: 77.79, twoLines: 1.3031, twoLinesCog: 75.24 },
  {
    z1: [0.1, 1],
    z0: [1, 3],
    lineGround: 1.3185,
    lineGroundCog: 76.13,
    twoLines: 1.2981,
    twoLinesCog: 74.95,
  },
  { z1: [0, 1], z0: [0, 10], lineGround: 1.5207, lineGroundCog: 87.8, twoLines: 1.4286, twoLinesCog: 82.48 },
  { z1: [0, 1], z0: null, lineGround: 1.7321, lineGroundCog: 100, twoLines: 1.5, twoLinesCog: 86.6 },
] as const;

const complex = ([re, im]: readonly [number, number]) => ({ re, im });

describe('The healthy phases of a ground fault', () => {
  it.each(table)('rise as the published table says for Z1 = $z1, Z0 = $z0', (row) => {
    const z1 = complex(row.z1);
    const z0 = row.z0 && complex(row.z0);
    const rise = findHealthyPhases(z1, z1, z0);
    expect(rise.lineGround).toBeCloseTo(row.lineGround, 4);
    expect(rise.lineLineGround).toBeCloseTo(row.twoLines, 4);
    expect((rise.lineGround / Math.sqrt(3)) * 100).toBeCloseTo(row.lineGroundCog, 2);
    expect((rise.lineLineGround / Math.sqrt(3)) * 100).toBeCloseTo(row.twoLinesCog, 2);
  });

  it('are judged by the worse of the two faults, beside the ratios', () => {
    const grounding = judgeGrounding({ re: 0, im: 1 }, { re: 0, im: 1 }, { re: 1, im: 3 });
    expect(grounding.x0x1).toBe(3);
    expect(grounding.r0x1).toBe(1);
    expect(grounding.cogPercent).toBeCloseTo(77.79, 2);
  });

  it('have no ratios where the zero sequence is open', () => {
    const z1 = { re: 0, im: 1 };
    expect(judgeGrounding(z1, z1, null)).toEqual({
      x0x1: null,
      r0x1: null,
      healthyPhasePu: Math.sqrt(3),
      cogPercent: 100,
    });
  });

  it('may rise over 80 % though both ratios are kept: R0/X1 = 1 with X0/X1 under 0.38', () => {
    const grounding = judgeGrounding({ re: 0, im: 1 }, { re: 0, im: 1 }, { re: 1, im: 0.3 });
    expect(grounding.cogPercent).toBeGreaterThan(80);
  });
});
