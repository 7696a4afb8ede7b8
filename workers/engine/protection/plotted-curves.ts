import { formatNumber } from '../../../shared/format.ts';
import type { CurveLine, CurvePoint, PlottedCurve } from '../../../shared/schemas/coordination.ts';
import type { TimeCurve } from '../../../shared/schemas/study-utility.ts';
import { findMeltTime, findTripTime, inverseConstants, usualInstantaneousS } from './time-curves.ts';

/* Curves as points for a plot on log–log paper. */

const pointsPerLine = 48;
/** An inverse curve begins a little over its pickup, where its time is still finite. */
const justOverPickup = 1.02;

/** Draws a curve from its pickup to at least `upToAmps` and 20 times the pickup. */
export function plotCurve(curve: TimeCurve, upToAmps: number): PlottedCurve {
  const { kind } = curve;
  if (curve.kind === 'fuse') {
    const lines: CurveLine[] = [
      { name: 'minimum melt', points: spread(curve.minimumMelt, (amps) => findMeltTime(curve, amps)) },
      { name: 'total clear', points: spread(curve.totalClear, (amps) => findTripTime(curve, amps)) },
    ];
    return {
      kind,
      words: 'fuse, minimum melt and total clear',
      source: 'points from the model',
      pickupA: null,
      lines,
    };
  }
  const { pickupA } = curve;
  const last = Math.max(20 * pickupA, 1.2 * upToAmps);
  const points = curve.kind === 'definite-time' ? definite(pickupA, curve.timeS, last) : inverse(curve, last);
  return {
    kind,
    words: describe(curve),
    source: sourceOf(curve),
    pickupA,
    lines: [{ name: 'operating', points }],
  };
}

function definite(pickupA: number, timeS: number, last: number): CurvePoint[] {
  return [
    [pickupA, timeS],
    [last, timeS],
  ];
}

function inverse(curve: Extract<TimeCurve, { timeDial: number }>, last: number): CurvePoint[] {
  const { pickupA, instantaneousA } = curve;
  const currents = spaceEvenly(pickupA * justOverPickup, last);
  const points = currents.map((amps) => [amps, findTripTime(curve, amps)!] as const);
  if (instantaneousA === undefined || instantaneousA <= currents[0]! || instantaneousA >= last) return points;
  // The step stands upright: its upper end is the inverse curve's, its lower end that of the instantaneous element.
  const upper = findTripTime({ ...curve, instantaneousA: undefined }, instantaneousA)!;
  const step: CurvePoint[] = [
    [instantaneousA, upper],
    [instantaneousA, findTripTime(curve, instantaneousA)!],
  ];
  const before = points.filter(([amps]) => amps < instantaneousA);
  return [...before, ...step, ...points.filter(([amps]) => amps > instantaneousA)];
}

function spread(
  given: readonly (readonly [number, number])[],
  timeAt: (amps: number) => number | null,
): CurvePoint[] {
  const first = given[0];
  const last = given.at(-1);
  if (!first || !last) return [];
  return spaceEvenly(first[0], last[0]).flatMap((amps) => {
    const seconds = timeAt(amps);
    return seconds === null ? [] : [[amps, seconds] as const];
  });
}

/** The ends are exact, so that a fuse begins and ends at its own points. */
function spaceEvenly(first: number, last: number): number[] {
  const steps = pointsPerLine - 1;
  return Array.from({ length: pointsPerLine }, (_, step) => {
    if (step === 0) return first;
    return step === steps ? last : first * (last / first) ** (step / steps);
  });
}

function describe(curve: Exclude<TimeCurve, { kind: 'fuse' }>): string {
  const pickup = `pickup ${formatNumber(curve.pickupA)} A`;
  if (curve.kind === 'definite-time') return `definite time, ${pickup}, ${curve.timeS} s`;
  const { instantaneousA, instantaneousS = usualInstantaneousS } = curve;
  const instant =
    instantaneousA === undefined
      ? ''
      : `, instantaneous at ${formatNumber(instantaneousA)} A in ${instantaneousS} s`;
  return `${inverseConstants[curve.kind].words}, ${pickup}, time dial ${curve.timeDial}${instant}`;
}

function sourceOf(curve: Exclude<TimeCurve, { kind: 'fuse' }>): string {
  return curve.kind === 'definite-time' ? 'setting from the model' : inverseConstants[curve.kind].source;
}
