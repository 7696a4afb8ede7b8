import type { Line, Transformer } from '../../../shared/schemas/study.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import type { NetExport } from '../flow/net-export.ts';
import { findReversePhase } from '../flow/net-export.ts';
import { listElements } from '../study-elements.ts';
import type { Working } from '../working.ts';
import type { Screening } from './screening.ts';

/* What may flow through what lies on the way to the source, and how a loading comes about. */

/** Something on the way to the source with a rating: amperes of a line or regulator, kVA of a transformer. */
export type Rated = { element: string; kv: number; amps?: number; kva?: number | undefined };

/** A line, with regulators in it, or a transformer. */
export function ratingsAt({ study, model }: Screening, branch: number): Rated[] {
  const { id: element, from, to } = branchAt(model, branch);
  const { lines, transformers } = ratingLists(study);
  const kv = nodeAt(model, from).kv;
  const transformer = transformers[branch - lines.length];
  if (transformer) return [{ element, kv: nodeAt(model, to).kv, kva: transformer.kva }];
  const amps = lines[branch]?.ampacityA;
  const regulators = (study.feeder.regulators ?? []).filter((each) => each.branch === element && each.ratedA);
  return [
    { element, kv, ...(amps !== undefined && { amps }) },
    ...regulators.map((each) => ({ element: each.id, kv, amps: each.ratedA! })),
  ];
}

/** By branch of the model: lines first, then transformers. */
type RatingLists = { lines: readonly Line[]; transformers: readonly Transformer[] };
const known = new WeakMap<Screening['study'], RatingLists>();

function ratingLists(study: Screening['study']): RatingLists {
  let lists = known.get(study);
  if (!lists) {
    lists = { lines: listElements(study, 'lines'), transformers: listElements(study, 'transformers') };
    known.set(study, lists);
  }
  return lists;
}

/** 0 where nothing flows back; nothing where something does and the rating is not known. */
export function percentOf({ kv, amps, kva }: Rated, sum: NetExport): number | undefined {
  const back = findReversePhase(sum);
  if (!back) return 0;
  const size = Math.hypot(back.kw, back.kvar);
  if (kva !== undefined) return ((3 * size) / kva) * 100;
  return amps === undefined ? undefined : (size / (kv / Math.sqrt(3)) / amps) * 100;
}

/** Where the load beyond takes all that is made there. */
export function workNothing({ generationKw, loadKw }: NetExport, working: Working): void {
  const generation = working.given('G', 'Generation beyond it, at full export', generationKw, 'kW');
  const load = working.given('L', 'Minimum load beyond it', loadKw, 'kW');
  working.compute(
    { symbol: 'back', words: 'Power that flows back', unit: 'kW' },
    'max(0, G - L)',
    [generation, load],
    Math.max(0, generationKw - loadKw),
  );
}

/** Of the phase through which most flows back. */
export function workLoading(
  { kv, amps, kva, sum, percent }: Rated & { sum: NetExport; percent: number },
  working: Working,
): void {
  const { phase, kw, kvar } = findReversePhase(sum)!;
  const letter = 'ABC'[phase]!;
  const p = working.given(
    'P',
    `Towards the source in phase ${letter}: generation less minimum load`,
    kw,
    'kW',
  );
  const q = working.given('Q', `Vars in phase ${letter}, of generators, capacitors and load`, kvar, 'kvar');
  const size = Math.hypot(kw, kvar);
  if (kva !== undefined) {
    const rating = working.given('S_r', 'Rating of the transformer', kva, 'kVA');
    working.compute(
      { symbol: 'loading', words: 'Loading of its phase', unit: '%' },
      '3*sqrt(P^2 + Q^2)/S_r*100',
      [p, q, rating],
      percent,
    );
    return;
  }
  const voltage = working.given('U_n', 'Nominal voltage between phases', kv, 'kV');
  const current = working.compute(
    { symbol: 'I', words: 'Current towards the source', unit: 'A' },
    'sqrt(P^2 + Q^2)/(U_n/sqrt(3))',
    [p, q, voltage],
    size / (kv / Math.sqrt(3)),
  );
  const rating = working.given('I_r', 'What it may carry', amps!, 'A');
  working.compute(
    { symbol: 'loading', words: 'Loading', unit: '%' },
    'I/I_r*100',
    [current, rating],
    percent,
  );
}
