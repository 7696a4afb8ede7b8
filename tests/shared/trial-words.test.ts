import { expect, it } from 'vitest';
import { classOfRoom, describeBinding } from '../../shared/room-words.ts';
import { describeChange } from '../../shared/trial-words.ts';
import type { TrialChange } from '../../shared/schemas/trials.ts';

/** A unit stays on the line of its number; here it need not. */
const say = (change: TrialChange) => describeChange(change).replaceAll('\u00a0', ' ');

it('says each change as one line, with what was changed and its unit', () => {
  expect(say({ kind: 'size', factor: 0.8 })).toBe('Size of the project times 0.80');
  expect(say({ kind: 'export-limit', kw: 1200 })).toBe('Export limit 1,200 kW');
  expect(say({ kind: 'export-limit', kw: null })).toBe('No export limit');
  expect(say({ kind: 'power-factor', powerFactor: 0.95, absorbs: true })).toBe(
    'Power factor 0.95, taking vars from the grid',
  );
  expect(say({ kind: 'device', element: 'cb1', interruptingKa: 16, groundPickupA: 240 })).toBe(
    'Device cb1: interrupting 16.00 kA, ground pickup 240 A',
  );
});

it('says how a neutral is grounded', () => {
  const change = { kind: 'transformer', element: 't', connection: 'YNd1' } as const;
  expect(say({ ...change, neutralFrom: { kind: 'solid' } })).toBe(
    'Transformer t: windings YNd1, utility-side neutral solidly grounded',
  );
  expect(say({ ...change, neutralFrom: { kind: 'impedance', rOhm: 0, xOhm: 9.84 } })).toContain(
    'through 0.00 Ω + j9.84 Ω',
  );
});

it('draws room by classes whose lower bound belongs to them, and says what binds', () => {
  const sizes = [0, 49.9, 50, 500, 1999, 2000, 20_000];
  expect(sizes.map((kva) => classOfRoom({ kva, bindsAt: null }))).toEqual([
    ...['none', 'none', 'some', 'more', 'more', 'most', 'most'],
  ]);
  expect(describeBinding({ kva: 5, bindsAt: { question: 'interrupting-duty', element: 'cb1' } })).toBe(
    'Does everything that interrupts faults keep its margin? (cb1)',
  );
  expect(describeBinding({ kva: 20_000, bindsAt: null })).toMatch(/largest size/);
});
