import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { PhaseShifts } from '../../../workers/engine/phase-shifts.ts';

describe('Phase shifts', () => {
  it('agree around every loop when each node has an hour of its own, in whatever order nodes are joined', () => {
    const node = fc.nat({ max: 19 });
    const hour = fc.nat({ max: 11 });
    fc.assert(
      fc.property(
        fc.array(hour, { minLength: 20, maxLength: 20 }),
        fc.array(fc.tuple(node, node), { maxLength: 80 }),
        (hours, pairs) => {
          const shifts = new PhaseShifts(20);
          for (const [u, v] of pairs) {
            const lag = (hours[v]! - hours[u]! + 12) % 12;
            expect(shifts.join(u, v, lag)).toBe(lag);
          }
          // What is joined by now says so, whatever it is told.
          for (const [u, v] of pairs) {
            const lag = (hours[v]! - hours[u]! + 12) % 12;
            expect(shifts.join(u, v, (lag + 5) % 12)).toBe(lag);
            expect(shifts.join(v, u, 0)).toBe((12 - lag) % 12);
          }
        },
      ),
      { seed: 4, numRuns: 300 },
    );
  });

  it('says what the rest of a loop makes', () => {
    const shifts = new PhaseShifts(3);
    expect(shifts.join(0, 1, 1)).toBe(1);
    expect(shifts.join(1, 2, 1)).toBe(1);
    expect(shifts.join(0, 2, 0)).toBe(2);
  });
});
