import { describe, expect, it } from 'vitest';
import type { TimeCurve } from '../../../../shared/schemas/study-utility.ts';
import { findMeltTime, findPickup, findTripTime } from '../../../../workers/engine/protection/time-curves.ts';

type Inverse = Extract<TimeCurve, { timeDial: number }>;

const inverse = (kind: Inverse['kind'], more: Partial<Inverse> = {}): Inverse => ({
  kind,
  pickupA: 400,
  timeDial: 1,
  ...more,
});

describe('An inverse-time curve', () => {
  // Worked by hand from t = TD·(A/(M^p − 1) + B); M^0.02 is 1.032712 at 5 and 1.047129 at 10.
  it.each([
    ['ieee-moderately-inverse', 5, 1.6884],
    ['ieee-very-inverse', 5, 1.3081],
    ['ieee-extremely-inverse', 5, 1.2967],
    ['iec-standard-inverse', 5, 4.2797],
    ['iec-very-inverse', 5, 3.375],
    ['iec-extremely-inverse', 5, 3.3333],
    ['ieee-moderately-inverse', 10, 1.2068],
    ['ieee-very-inverse', 10, 0.6891],
    ['ieee-extremely-inverse', 10, 0.4065],
    ['iec-standard-inverse', 10, 2.9706],
    ['iec-very-inverse', 10, 1.5],
    ['iec-extremely-inverse', 10, 0.8081],
  ] as const)('%s trips at %d times its pickup in %f s', (kind, multiple, seconds) => {
    expect(findTripTime(inverse(kind), 400 * multiple)).toBeCloseTo(seconds, 3);
    expect(findTripTime(inverse(kind, { timeDial: 3 }), 400 * multiple)).toBeCloseTo(3 * seconds, 2);
  });

  it('does not trip at its pickup or under it', () => {
    expect(findTripTime(inverse('ieee-very-inverse'), 400)).toBeNull();
    expect(findTripTime(inverse('ieee-very-inverse'), 399)).toBeNull();
    expect(findTripTime(inverse('ieee-very-inverse'), 401)).toBeGreaterThan(1000);
  });

  it('trips without delay from its instantaneous setting on, at 0.05 s unless it says otherwise', () => {
    const curve = inverse('iec-very-inverse', { instantaneousA: 4000 });
    expect(findTripTime(curve, 3999)).toBeGreaterThan(1.4);
    expect(findTripTime(curve, 4000)).toBe(0.05);
    expect(findTripTime({ ...curve, instantaneousS: 0.02 }, 4000)).toBe(0.02);
  });
});

describe('A definite-time curve', () => {
  it('trips in one time from its pickup on', () => {
    const curve: TimeCurve = { kind: 'definite-time', pickupA: 100, timeS: 0.5 };
    expect([99, 100, 5000].map((amps) => findTripTime(curve, amps))).toEqual([null, 0.5, 0.5]);
    expect(findPickup(curve)).toBe(100);
  });
});

describe('A fuse', () => {
  const fuse: Extract<TimeCurve, { kind: 'fuse' }> = {
    kind: 'fuse',
    minimumMelt: [
      [200, 100],
      [2000, 0.1],
    ],
    totalClear: [
      [220, 100],
      [2200, 0.1],
    ],
  };

  it('is a straight line between its points on log–log paper', () => {
    // Half way between 200 and 2,000 A is 632.46 A, and half way between 100 and 0.1 s is 3.1623 s.
    expect(findMeltTime(fuse, 632.4555)).toBeCloseTo(3.16228, 4);
    expect(findTripTime(fuse, 695.7011)).toBeCloseTo(3.16228, 4);
    expect(findTripTime(fuse, 220)).toBeCloseTo(100, 9);
  });

  it('never melts under its first point and keeps its last time beyond the last', () => {
    expect(findTripTime(fuse, 219)).toBeNull();
    expect(findMeltTime(fuse, 50_000)).toBe(0.1);
    expect(findPickup(fuse)).toBe(220);
  });
});
