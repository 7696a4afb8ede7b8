import type { TimeCurve } from '../../../shared/schemas/study-utility.ts';

/* When a relay or a fuse trips for a current, as its curve says. */

type InverseKind = Exclude<TimeCurve['kind'], 'definite-time' | 'fuse'>;

const ieee = 'IEEE C37.112 (constants from memory)';
const iec = 'IEC 60255-151 (constants from memory)';

/**
 * t = TD·(A/(M^p − 1) + B) with M the multiple of pickup. IEEE C37.112-1996, table 1, gives A, B and p; IEC 60255-151:2009,
 * annex A, the same shape with B = 0 (all values from memory).
 */
export const inverseConstants: Readonly<
  Record<InverseKind, { words: string; a: number; b: number; p: number; source: string }>
> = {
  'ieee-moderately-inverse': { words: 'IEEE moderately inverse', a: 0.0515, b: 0.114, p: 0.02, source: ieee },
  'ieee-very-inverse': { words: 'IEEE very inverse', a: 19.61, b: 0.491, p: 2, source: ieee },
  'ieee-extremely-inverse': { words: 'IEEE extremely inverse', a: 28.2, b: 0.1217, p: 2, source: ieee },
  'iec-standard-inverse': { words: 'IEC standard inverse', a: 0.14, b: 0, p: 0.02, source: iec },
  'iec-very-inverse': { words: 'IEC very inverse', a: 13.5, b: 0, p: 1, source: iec },
  'iec-extremely-inverse': { words: 'IEC extremely inverse', a: 80, b: 0, p: 2, source: iec },
};

/** Of an instantaneous element that does not say when it trips; common practice, no source. */
export const usualInstantaneousS = 0.05;

/** A point of the curve of a fuse: current in A and time in s. */
type FusePoint = readonly [amps: number, seconds: number];

/**
 * Gives the time in s in which a curve trips at a current in A, null where it does not. A fuse is taken at its total
 * clearing time; `findMeltTime` gives when it begins to melt.
 * Example: IEEE very inverse, pickup 400 A, time dial 2, at 2,000 A: M = 5, t = 2·(19.61/24 + 0.491) = 2.6162 s.
 */
export function findTripTime(curve: TimeCurve, amps: number): number | null {
  if (curve.kind === 'fuse') return interpolate(curve.totalClear, amps);
  if (curve.kind === 'definite-time') return amps >= curve.pickupA ? curve.timeS : null;
  const { instantaneousA, instantaneousS = usualInstantaneousS } = curve;
  const inverse = findInverseTime(curve, amps);
  if (instantaneousA === undefined || amps < instantaneousA) return inverse;
  return inverse === null ? instantaneousS : Math.min(inverse, instantaneousS);
}

/** An inverse curve has no time at its pickup itself, where it would take for ever. */
function findInverseTime(curve: Extract<TimeCurve, { timeDial: number }>, amps: number): number | null {
  const multiple = amps / curve.pickupA;
  if (!(multiple > 1)) return null;
  const { a, b, p } = inverseConstants[curve.kind];
  const seconds = curve.timeDial * (a / (multiple ** p - 1) + b);
  return Number.isFinite(seconds) ? seconds : null;
}

/** Gives when a fuse begins to melt, null where it does not. */
export function findMeltTime(
  { minimumMelt }: Extract<TimeCurve, { kind: 'fuse' }>,
  amps: number,
): number | null {
  return interpolate(minimumMelt, amps);
}

/** A straight line between the points on log–log paper; under the first point it never melts, over the last the last time holds. */
function interpolate(points: readonly FusePoint[], amps: number): number | null {
  const first = points[0];
  const last = points.at(-1);
  if (!first || !last || amps < first[0]) return null;
  if (amps >= last[0]) return last[1];
  const next = points.findIndex(([current]) => current > amps);
  const [amps0, seconds0] = points[next - 1]!;
  const [amps1, seconds1] = points[next]!;
  const share = Math.log(amps / amps0) / Math.log(amps1 / amps0);
  return seconds0 * (seconds1 / seconds0) ** share;
}

/** Gives the current from which a curve trips at all. */
export function findPickup(curve: TimeCurve): number {
  return curve.kind === 'fuse' ? (curve.totalClear[0]?.[0] ?? Infinity) : curve.pickupA;
}
