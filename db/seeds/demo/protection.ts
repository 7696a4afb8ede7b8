import type { Device } from '../../../shared/schemas/study.ts';
import type { TimeCurve } from '../../../shared/schemas/study-utility.ts';

/* Tripping curves of the demo's devices: settings and melting times invented, of customary shape (common practice, no source). */

/** Times over multiples of a link's rated current: when it begins to melt, and when it has cleared at the latest. */
const meltTimes: readonly (readonly [timesRated: number, seconds: number])[] = [
  [2, 300],
  [2.4, 30],
  [3, 6],
  [5, 1.1],
  [8, 0.3],
  [12, 0.12],
  [25, 0.034],
  [100, 0.011],
];

/** A link that melts like the table, and clears a third later and a hundredth of a second more. */
export function makeFuseCurve(ratedA: number): TimeCurve {
  const points = meltTimes.map(([times, seconds]) => [times * ratedA, seconds] as [number, number]);
  const cleared = points.map(
    ([amps, seconds]) => [amps, Math.round((seconds * 1.33 + 0.013) * 1e4) / 1e4] as [number, number],
  );
  return { kind: 'fuse', minimumMelt: points, totalClear: cleared };
}

type Pickups = Pick<Device, 'phasePickupA' | 'groundPickupA'>;

/** Very inverse relays: slow ones at the head of a feeder, quicker ones further out. */
export function makeRelayCurves(
  { phasePickupA, groundPickupA }: Pickups,
  place: 'head' | 'line',
): Pick<Device, 'phaseCurve' | 'groundCurve'> {
  const timeDial = place === 'head' ? 4 : 1.6;
  const inverse = (pickupA: number, dial: number): TimeCurve => ({
    kind: 'ieee-very-inverse',
    pickupA,
    timeDial: dial,
  });
  return {
    ...(phasePickupA !== undefined && { phaseCurve: inverse(phasePickupA, timeDial) }),
    ...(groundPickupA !== undefined && { groundCurve: inverse(groundPickupA, timeDial * 1.25) }),
  };
}
