import type { Line } from '../../../shared/schemas/study.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import { branchAt } from '../model-parts.ts';
import type { Working } from '../working.ts';
import type { Screening } from './screening.ts';

/* How far the point of interconnection is from the substation, along the lines that lead there. */

/** Of the international mile, exactly (value from memory; the yard agreement of 1959). */
const kmPerMile = 1.609344;

export type CircuitWay = {
  readonly lines: readonly Line[];
  readonly km: number;
  readonly miles: number;
  /** Lines that are not marked as part of a mainline, or not said to be either way. */
  readonly unmarked: readonly Line[];
};

/**
 * The way to the substation in the model as it stands: all lines between the point of interconnection and the transformer of a
 * substation that the study lists; without one all lines up to the source, which is never shorter.
 */
export function traceCircuit(screening: Screening): CircuitWay {
  let way = known.get(screening.upstream);
  if (!way) known.set(screening.upstream, (way = measureWay(screening)));
  return way;
}

const known = new WeakMap<Screening['upstream'], CircuitWay>();

function measureWay({ study, model, upstream }: Screening): CircuitWay {
  const banks = new Set((study.feeder.substations ?? []).map(({ transformer }) => transformer));
  const ids = upstream.branches.map((branch) => branchAt(model, branch).id);
  const bank = ids.findIndex((id) => banks.has(id));
  const onWay = new Set(bank === -1 ? ids : ids.slice(0, bank));
  const lines = (study.feeder.lines ?? []).filter(({ id }) => onWay.has(id));
  const km = lines.reduce((total, line) => total + line.km, 0);
  return { lines, km, miles: km / kmPerMile, unmarked: lines.filter(({ mainline }) => mainline !== true) };
}

/** Whether all of it is a mainline; nothing where some line does not say. */
export function isMainline({ unmarked }: CircuitWay): boolean | undefined {
  if (unmarked.length === 0) return true;
  return unmarked.some(({ mainline }) => mainline === false) ? false : undefined;
}

/** Writes down the length and gives it in miles. */
export function explainMiles(working: Working, { km, miles, lines }: CircuitWay): Quantity {
  const words = `Length of the ${lines.length} lines from the substation`;
  return working.compute(
    { symbol: 'd', words: 'Electrical circuit miles from the substation', unit: 'mi' },
    'd_km / c',
    [working.given('d_km', words, km, 'km'), working.given('c', 'Kilometres to a mile', kmPerMile, 'km/mi')],
    miles,
  );
}
