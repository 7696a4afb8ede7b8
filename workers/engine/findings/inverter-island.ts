import type { Complex } from '../complex.ts';
import { add, divide, magnitude, subtract } from '../complex.ts';
import { findHealthyPhases } from '../grounding.ts';

/*
 * What inverters do to healthy phases in an island (IEEE C62.92.6; method from memory): a limited current I of the positive
 * sequence alone into the load, which is Z_L = V²/P in the positive and the negative sequence and Z_L over its grounded share
 * in the zero sequence, beside all that gives ground current there. All per unit: of nominal voltage and of one base.
 */

const unity: Complex = { re: 1, im: 0 };

/** What stands in an island at one moment. */
export type InverterIsland = {
  /** Nameplate of all inverters that are current sources, on the base. */
  current: number;
  /** Load on the base: 1/Z_L. */
  load: number;
  /** Share of the load that is tied to the earthed neutral, 0 to 1. */
  groundedShare: number;
  /** What holds voltage there, as seen from the place; missing where nothing does. */
  holding: { z1: Complex; z2: Complex; e: number } | undefined;
  /** All zero-sequence shunts as seen from the place, the load apart; null where there is none. */
  groundSources: Complex | null;
};

export type InverterVoltages = {
  zLoad: number;
  z1: Complex;
  z2: Complex;
  z0: Complex | null;
  /** Before the ground fault, utility gone. */
  prefault: number;
  lineGround: number;
  lineLineGround: number;
  /** The highest healthy phase of both faults. */
  highest: number;
};

/**
 * Finds the voltages of healthy phases in faults to ground, of nominal line to neutral.
 * Before the fault V = I·Z1 where nothing holds voltage. Beside machines with E behind Zm, and the current in step with the
 * voltage it makes, |V − I·Z1| = E·|Z1/Zm|: V = I·Re Z1 + √((E·|Z1/Zm|)² − (I·Im Z1)²).
 * Only grounded load, no ground source: Z0 = Z1, no rise, V = I·Z_L. Load in delta without a ground source: Z0 open, √3·V.
 */
export function findInverterVoltages(island: InverterIsland): InverterVoltages {
  const { current, load, groundedShare, holding, groundSources } = island;
  const admittance: Complex = { re: load, im: 0 };
  const inverse = (y: Complex) => divide(unity, y);
  const beside = (z: Complex | undefined) => inverse(z ? add(admittance, inverse(z)) : admittance);
  const z1 = beside(holding?.z1);
  const z2 = beside(holding?.z2);
  const grounded: Complex = { re: load * groundedShare, im: 0 };
  const y0 = groundSources ? add(grounded, inverse(groundSources)) : grounded;
  const z0 = y0.re === 0 && y0.im === 0 ? null : inverse(y0);
  const prefault = findPrefault(current, z1, holding);
  const healthy = findHealthyPhases(z1, z2, z0);
  return {
    zLoad: 1 / load,
    z1,
    z2,
    z0,
    prefault,
    lineGround: healthy.lineGround * prefault,
    lineLineGround: healthy.lineLineGround * prefault,
    highest: Math.max(healthy.lineGround, healthy.lineLineGround) * prefault,
  };
}

function findPrefault(current: number, z1: Complex, holding: InverterIsland['holding']): number {
  if (!holding) return current * z1.re;
  const held = holding.e * magnitude(divide(z1, holding.z1));
  const across = current * z1.im;
  return current * z1.re + Math.sqrt(Math.max(0, held * held - across * across));
}

/* What is less than this beside a unit admittance is rounding, and nothing that could hold a voltage. */
const nothing = 1e-10;

/** Takes a unit admittance off an impedance that it stands beside; nothing where nothing is left. */
export function withoutHolder(z: Complex): Complex | undefined {
  const left = subtract(divide(unity, z), unity);
  return magnitude(left) < nothing ? undefined : divide(unity, left);
}
