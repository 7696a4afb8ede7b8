import type { DeviceOperation, PairTimes } from '../../../shared/schemas/coordination.ts';
import type { TimeCurve } from '../../../shared/schemas/study-utility.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import type { Working } from '../working.ts';
import { inverseConstants } from './time-curves.ts';

/* The steps from a current to a tripping time, and from two of them to a margin. */

/** A device with its curve, and which line of a fuse counts. */
export type Timed = { id: string; curve: TimeCurve; line: 'minimumMelt' | 'totalClear' };

/** Writes down the margin of a pair; both have a time. `suffix` tells the state. */
export function workMargin(
  working: Working,
  first: Timed,
  backup: Timed,
  times: PairTimes,
  suffix: string,
): void {
  const tFirst = workTime(working, first, times.first, `_first_${suffix}`);
  const tBackup = workTime(working, backup, times.backup, `_backup_${suffix}`);
  working.compute(
    { symbol: `margin_${suffix}`, words: `margin of ${backup.id} over ${first.id}, ${suffix}`, unit: 's' },
    `${tBackup.symbol} - ${tFirst.symbol}`,
    [tBackup, tFirst],
    times.marginS!,
  );
}

function workTime(
  working: Working,
  { id, curve, line }: Timed,
  { amps, seconds }: DeviceOperation,
  suffix: string,
): Quantity {
  const given = (symbol: string, words: string, value: number, unit: string) =>
    working.given(`${symbol}${suffix}`, words, value, unit);
  const result = { symbol: `t${suffix}`, words: `time in which ${id} trips`, unit: 's' };
  if (curve.kind === 'definite-time') return given('t', `time of ${id}, from the model`, seconds!, 's');
  const i = given('I', `current in ${id}`, amps, 'A');
  if (curve.kind === 'fuse') return interpolate();
  if (curve.instantaneousA !== undefined && amps >= curve.instantaneousA) {
    return given('t', `${id} trips without delay from ${curve.instantaneousA} A on`, seconds!, 's');
  }
  const { words, a, b, p } = inverseConstants[curve.kind];
  const pickup = given('I_pickup', `pickup of ${id}, from the model`, curve.pickupA, 'A');
  const multiple = working.compute(
    { symbol: `M${suffix}`, words: 'multiple of pickup', unit: '' },
    `I${suffix}/I_pickup${suffix}`,
    [i, pickup],
    amps / curve.pickupA,
  );
  const dial = given('TD', `time dial of ${id}, from the model`, curve.timeDial, '');
  const [ca, cb, cp] = [
    given('A', `constant of ${words}`, a, 's'),
    given('B', `constant of ${words}`, b, 's'),
    given('p', `exponent of ${words}`, p, ''),
  ];
  const formula = 'TD*(A/(M^p - 1) + B)'.replace(/[A-Za-z]+/g, (name) => `${name}${suffix}`);
  return working.compute(result, formula, [dial, ca, multiple, cp, cb], seconds!);

  function interpolate(): Quantity {
    const points = (curve as Extract<TimeCurve, { kind: 'fuse' }>)[line];
    const next = points.findIndex(([current]) => current > amps);
    if (next <= 0) return given('t', `last time of the curve of ${id}`, seconds!, 's');
    const [low, high] = [points[next - 1]!, points[next]!];
    const i0 = given('I_0', `point of the curve of ${id} below`, low[0], 'A');
    const t0 = given('t_0', 'its time', low[1], 's');
    const i1 = given('I_1', `point of the curve of ${id} above`, high[0], 'A');
    const t1 = given('t_1', 'its time', high[1], 's');
    const onPaper = 't_0*(t_1/t_0)^(log(I/I_0)/log(I_1/I_0))'.replace(
      /\b(t_0|t_1|I_0|I_1|I)\b/g,
      (name) => `${name}${suffix}`,
    );
    return working.compute(result, onPaper, [t0, t1, i, i0, i1], seconds!);
  }
}
