import type { Injections, VoltVarUnit } from './injections.ts';
import { positiveSequence } from './matrix3.ts';

/** Share of the way to the curve that vars go in one iteration: steeper curves on weaker grids would else swing. */
const damping = 0.4;

/** Reads a curve of pairs by rising voltage; flat before the first and after the last. */
export function readCurve(curve: VoltVarUnit['curve'], volts: number): number {
  const next = curve.findIndex(([at]) => at >= volts);
  if (next === -1) return curve.at(-1)?.[1] ?? 0;
  const [v1, q1] = curve[next]!;
  if (next === 0) return q1;
  const [v0, q0] = curve[next - 1]!;
  return v1 === v0 ? q1 : q0 + ((q1 - q0) * (volts - v0)) / (v1 - v0);
}

/** Moves the vars of each such inverter towards its curve, within what its power leaves it, and gives the largest gap. */
export function followCurves({ terms, balanced, following }: Injections, v: Float64Array): number {
  let largest = 0;
  for (const { at, phases, balanced: index, first, count, curve, size, room } of following) {
    const wanted = Math.max(-room, Math.min(room, readCurve(curve, voltageOf(v, at, phases)) * size));
    if (index !== -1) {
      const gap = wanted / 3 - balanced.q[index]!;
      balanced.q[index]! += damping * gap;
      largest = Math.max(largest, Math.abs(gap) * 3);
      continue;
    }
    for (let k = first; k < first + count; k++) {
      // What a term draws, so that vars into the grid are negative.
      const gap = -wanted / count - terms.q[k]!;
      terms.q[k]! += damping * gap;
      largest = Math.max(largest, Math.abs(gap));
    }
  }
  return largest;
}

/** Over nominal: the positive sequence of three phases, the voltage between two, that of one. */
function voltageOf(v: Float64Array, at: number, phases: number): number {
  const list = [0, 1, 2].filter((phase) => phases & (1 << phase));
  if (list.length === 3) {
    const { re, im } = positiveSequence(v, at);
    return Math.hypot(re, im);
  }
  const a = at + 2 * list[0]!;
  if (list.length === 1) return Math.hypot(v[a]!, v[a + 1]!);
  const b = at + 2 * list[1]!;
  return Math.hypot(v[a]! - v[b]!, v[a + 1]! - v[b + 1]!) / Math.sqrt(3);
}
