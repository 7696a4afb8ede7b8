import type { Inverter, Machine } from '../../../shared/schemas/study.ts';
import { addPositiveSequence, positiveSequence } from './matrix3.ts';

/*
 * What loads, capacitors and generators draw or send, per unit of a phase's share of the base: P + jQ drawn, so that
 * generation counts as negative. Three-phase generators send a balanced positive-sequence current, all else is by phase
 * or between phases.
 */

export const constantPower = 0;
export const constantCurrent = 1;
export const constantImpedance = 2;

/** One current: from `plus` to `minus`, indices of a voltage's real part; `minus` -1 is the neutral. */
type Terms = { plus: number[]; minus: number[]; p: number[]; q: number[]; model: number[] };

export type Injections = {
  readonly terms: Terms;
  /** Three-phase generators: where their voltage is, and what they send in all three phases together, over three. */
  readonly balanced: { at: number[]; p: number[]; q: number[] };
  readonly switched: readonly SwitchedCapacitor[];
  readonly following: readonly VoltVarUnit[];
};

export type SwitchedCapacitor = {
  id: string;
  /** Terms that are its own, and their vars when it is on. */
  first: number;
  count: number;
  q: number;
  on: number;
  off: number;
};

/** An inverter whose vars follow its voltage. */
export type VoltVarUnit = {
  at: number;
  phases: number;
  /** Index in the balanced list, or of its terms where it has fewer than three phases. */
  balanced: number;
  first: number;
  count: number;
  curve: readonly (readonly [volts: number, vars: number])[];
  /** Share of the base of one phase, and the most that is left beside its power. */
  size: number;
  room: number;
};

export type FlowLoad = 'peak' | 'minimum';

/** What a generator sends: export limit or rating, and the vars of its power factor (positive: into the grid). */
export function outputOf({
  kva,
  exportKw,
  powerFactor = 1,
}: Pick<Inverter | Machine, 'kva' | 'exportKw' | 'powerFactor'>): { kw: number; kvar: number } {
  const factor = Math.abs(powerFactor);
  const kw = Math.min(exportKw ?? Infinity, kva * factor);
  const sign = powerFactor < 0 ? -1 : 1;
  const kvar = factor === 0 ? kva : (kw * Math.sqrt(1 - factor * factor)) / factor;
  return { kw, kvar: sign * kvar };
}

/** Writes the current into each place at the voltages `v`. */
export function writeCurrents({ terms, balanced }: Injections, v: Float64Array, j: Float64Array): void {
  j.fill(0);
  const { plus, minus, p, q, model } = terms;
  for (let k = 0; k < plus.length; k++) {
    const a = plus[k]!;
    const b = minus[k]!;
    const re = v[a]! - (b === -1 ? 0 : v[b]!);
    const im = v[a + 1]! - (b === -1 ? 0 : v[b + 1]!);
    const square = re * re + im * im;
    const nominal = b === -1 ? 1 : 3;
    // conj(S/V) is conj(S)·V/|V|²; at constant current |V|·Vn takes the place of |V|², at constant impedance Vn².
    const over =
      model[k] === constantPower
        ? square
        : model[k] === constantCurrent
          ? Math.sqrt(square * nominal)
          : nominal;
    const currentRe = (p[k]! * re + q[k]! * im) / over;
    const currentIm = (p[k]! * im - q[k]! * re) / over;
    j[a]! -= currentRe;
    j[a + 1]! -= currentIm;
    if (b === -1) continue;
    j[b]! += currentRe;
    j[b + 1]! += currentIm;
  }
  for (let k = 0; k < balanced.at.length; k++) {
    const at = balanced.at[k]!;
    const { re, im } = positiveSequence(v, at);
    const square = re * re + im * im;
    const [pk, qk] = [balanced.p[k]!, balanced.q[k]!];
    addPositiveSequence(j, at, (pk * re + qk * im) / square, (pk * im - qk * re) / square);
  }
}
