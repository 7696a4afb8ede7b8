import type { Quantity } from '../../../shared/schemas/working.ts';
import { a, a2, add, divide, magnitude, multiply, scale, subtract, sum } from '../complex.ts';
import type { Complex } from '../complex.ts';
import { findHealthyPhases } from '../grounding.ts';
import type { Working } from '../working.ts';

/* The working of the voltages that healthy phases reach in faults to ground. */

/**
 * Writes down how far the healthy phases rise, over the voltage before the fault, and gives the larger of both faults.
 * One phase to ground: Vb = a² − K, Vc = a − K, with K = (Z0 − Z1)/(Z0 + 2·Z1) where Z1 = Z2. Two phases: Va = 3·Zp/(Z1 + Zp).
 * `z0` is missing where the zero sequence is open: √3 and 3·Z2/(Z1 + Z2).
 */
export function explainHealthyPhases(
  working: Working,
  { z1, z2, z0 }: { z1: Quantity; z2: Quantity; z0: Quantity | undefined },
): Quantity {
  const [z1Value, z2Value] = [z1, z2].map(({ value }) => value as Complex) as [Complex, Complex];
  const { lineGround, lineLineGround } = findHealthyPhases(
    z1Value,
    z2Value,
    z0 ? (z0.value as Complex) : null,
  );
  const oneWords = 'Highest healthy phase, one phase to ground, over the voltage before the fault';
  const twoWords = 'Healthy phase, two phases to ground, over the voltage before the fault';
  const one = { symbol: 'V_LG', words: oneWords, unit: 'pu' };
  const two = { symbol: 'V_LLG', words: twoWords, unit: 'pu' };
  const found = z0 ? explainEarthed(z0) : explainOpen();
  return working.compute(
    { symbol: 'V_max', words: 'The larger of the two', unit: 'pu' },
    'max(V_LG, V_LLG)',
    found,
    Math.max(lineGround, lineLineGround),
  );

  function explainOpen(): Quantity[] {
    const openWords = `${oneWords}: nothing returns through the earth, so it rises to line to line`;
    return [
      working.compute({ ...one, words: openWords }, 'sqrt(3)', [], lineGround),
      working.compute(two, 'abs(3*Z2/(Z1 + Z2))', [z1, z2], lineLineGround),
    ];
  }

  function explainEarthed(earthed: Quantity): Quantity[] {
    const z0Value = earthed.value as Complex;
    const turn = working.compute(
      { symbol: 'a', words: 'A turn by 120 degrees', unit: '' },
      '(i*sqrt(3) - 1)/2',
      [],
      a,
    );
    const [vb, vc] = isAlike(z1Value, z2Value)
      ? explainAlike(turn, earthed, z0Value)
      : explainUnlike(turn, earthed, z0Value);
    const parallel = working.compute(
      { symbol: 'Z_p', words: 'Negative and zero sequence in parallel', unit: z1.unit },
      'Z2*Z0/(Z2 + Z0)',
      [z2, earthed],
      divide(multiply(z2Value, z0Value), add(z2Value, z0Value)),
    );
    return [
      working.compute(
        one,
        'max(abs(V_b), abs(V_c))',
        [vb, vc],
        Math.max(magnitude(vb.value as Complex), magnitude(vc.value as Complex)),
      ),
      working.compute(two, 'abs(3*Z_p/(Z1 + Z_p))', [parallel, z1], lineLineGround),
    ];
  }

  /** K = (Z0 − Z1)/(Z0 + 2·Z1), the fall that phase b and c share where Z1 = Z2. */
  function explainAlike(turn: Quantity, earthed: Quantity, z0Value: Complex): [Quantity, Quantity] {
    const fall = divide(subtract(z0Value, z1Value), add(z0Value, scale(z1Value, 2)));
    const words = 'How far the neutral moves with phase a to ground; Z2 is Z1';
    const k = working.compute(
      { symbol: 'K', words, unit: 'pu' },
      '(Z0 - Z1)/(Z0 + 2*Z1)',
      [earthed, z1],
      fall,
    );
    return [
      working.compute(phase('b'), 'a^2 - K', [turn, k], subtract(a2, fall)),
      working.compute(phase('c'), 'a - K', [turn, k], subtract(a, fall)),
    ];
  }

  function explainUnlike(turn: Quantity, earthed: Quantity, z0Value: Complex): [Quantity, Quantity] {
    const total = sum(z0Value, z1Value, z2Value);
    const loop = working.compute(
      { symbol: 'Z_sum', words: 'All three sequences in series', unit: z1.unit },
      'Z0 + Z1 + Z2',
      [earthed, z1, z2],
      total,
    );
    const inputs = [turn, earthed, z1, z2, loop];
    const voltage = (own: Complex, other: Complex) =>
      subtract(own, divide(sum(z0Value, multiply(own, z1Value), multiply(other, z2Value)), total));
    return [
      working.compute(phase('b'), 'a^2 - (Z0 + a^2*Z1 + a*Z2)/Z_sum', inputs, voltage(a2, a)),
      working.compute(phase('c'), 'a - (Z0 + a*Z1 + a^2*Z2)/Z_sum', inputs, voltage(a, a2)),
    ];
  }
}

function phase(letter: 'b' | 'c') {
  return { symbol: `V_${letter}`, words: `Phase ${letter} with phase a to ground`, unit: 'pu' };
}

function isAlike(p: Complex, q: Complex): boolean {
  return p.re === q.re && p.im === q.im;
}
