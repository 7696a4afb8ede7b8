import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import { Working } from '../working.ts';
import type { Currents, Measurement } from './contribution.ts';
import type { OwnCurrent } from './own-currents.ts';

const kinds = [
  { kind: 'threePhase', mark: '3', words: 'three-phase' },
  { kind: 'lineGround', mark: '1', words: 'line-to-ground' },
] as const;

/** Writes down what all generation adds at the primary node. */
export function workContribution({
  element,
  none,
  withAll,
  own,
  after,
}: Measurement): readonly WorkingStep[] {
  const working = new Working();
  const present = kinds.filter(({ kind }) => none[kind] !== null);
  const current = (symbol: string, words: string, value: number | null) =>
    working.given(symbol, `${words} current at ${element}`, value ?? 0, 'A');
  const before = present.map(({ kind, mark, words }) =>
    current(`I${mark}_none`, `${words} fault, sources alone:`, none[kind]),
  );
  const largest = working.compute(
    { symbol: 'I_none', words: 'the largest of them', unit: 'A' },
    before.length > 1 ? 'max(I3_none, I1_none)' : before[0]!.symbol,
    before,
    Math.max(...before.map(({ value }) => value as number)),
  );
  const added = own ? workOwn(working, own) : workIncrease();
  working.compute(
    { symbol: 'share', words: 'added by all generation', unit: '%' },
    `${added.symbol}/I_none*100`,
    [added, largest],
    after * 100,
  );
  return working.steps;

  function workIncrease(): Quantity {
    const { raise } = withAll;
    const u = working.given(
      'u',
      'sum of |Zkm/Zkk| times the current of each inverter, over that of the rest',
      raise,
      '',
    );
    const increases = present.map(({ kind, mark, words }, index) =>
      increaseOf(kind, mark, words, u, before[index]!),
    );
    if (increases.length === 1) return increases[0]!;
    return working.compute(
      { symbol: 'D', words: 'the larger increase', unit: 'A' },
      'max(D3, D1)',
      increases,
      Math.max(...increases.map(({ value }) => value as number)),
    );
  }

  function increaseOf(
    kind: keyof Currents,
    mark: string,
    words: string,
    u: Quantity,
    start: Quantity,
  ): Quantity {
    const { phasors, bare, raise } = withAll;
    const asPhasors = current(
      `I${mark}_all`,
      `${words} fault, with all generation, phasors added:`,
      phasors[kind],
    );
    const withoutThem = current(`I${mark}_bare`, `${words} fault, with all but inverters:`, bare[kind]);
    const larger = working.compute(
      { symbol: `I${mark}`, words: 'the larger of phasors and magnitudes added', unit: 'A' },
      `max(I${mark}_all, I${mark}_bare*(1 + u))`,
      [asPhasors, withoutThem, u],
      Math.max(phasors[kind] ?? 0, (bare[kind] ?? 0) * (1 + raise)),
    );
    return working.compute(
      { symbol: `D${mark}`, words: `increase of the ${words} current`, unit: 'A' },
      `I${mark} - ${start.symbol}`,
      [larger, start],
      (larger.value as number) - (start.value as number),
    );
  }
}

function workOwn(working: Working, own: readonly OwnCurrent[]): Quantity {
  const each = own.map(({ id, amps, kva, perUnit }, index) =>
    working.given(
      `I_g${index + 1}`,
      `own current of ${id}: ${Number(perUnit.toPrecision(6))} times the rated current of ${kva} kVA at this voltage`,
      amps,
      'A',
    ),
  );
  return working.compute(
    { symbol: 'D', words: 'sum of the own currents', unit: 'A' },
    each.length === 0 ? '0' : each.map(({ symbol }) => symbol).join(' + '),
    each,
    own.reduce((total, { amps }) => total + amps, 0),
  );
}
