import type { Device } from '../../../shared/schemas/study.ts';

/*
 * Interrupting ratings that are made, symmetrical kA with the X/R of their test, by rated kV (all values from memory):
 * distribution cutouts C37.42, reclosers C37.60, breakers C37.06.
 */

type StandardRating = { ka: number; testXr: number };

type Series = { upToKv: number; source: string; ratings: readonly StandardRating[] }[];

const tested = (testXr: number, ...kiloamperes: number[]) => kiloamperes.map((ka) => ({ ka, testXr }));

const cutouts: Series = [
  {
    upToKv: 38,
    source: 'IEEE C37.42 (values from memory)',
    ratings: [...tested(8, 5.6, 7.1), ...tested(15, 8), ...tested(12, 10.6), ...tested(15, 13.2)],
  },
];
const reclosers: Series = [
  [15.5, [1.25, 2, 3, 4, 6, 8, 10, 12, 12.5, 16]] as const,
  [27, [2.5, 4, 8, 10, 12, 12.5]] as const,
  [38, [6, 8, 12, 12.5, 16]] as const,
].map(([upToKv, list]) => ({
  upToKv,
  source: 'IEEE C37.60 (values from memory)',
  // The X/R of the test rises with the rating; the lowest is taken, which is the safe side.
  ratings: tested(8, ...list),
}));
const breakers: Series = [
  [4.76, [31.5, 40, 50, 63]] as const,
  [15, [20, 25, 31.5, 40, 50, 63]] as const,
  [27, [16, 25]] as const,
  [38, [16, 20, 25, 31.5, 40]] as const,
].map(([upToKv, list]) => ({
  upToKv,
  source: 'IEEE C37.06 (values from memory)',
  ratings: tested(17, ...list),
}));

const seriesOf: Readonly<Record<string, Series>> = { fuse: cutouts, recloser: reclosers, breaker: breakers };

/** Gives the ratings that are made for a device's kind and place, smallest first; nothing where none is known. */
export function findStandardRatings(
  { kind }: Device,
  kv: number,
): { source: string; ratings: readonly StandardRating[] } | undefined {
  return seriesOf[kind.toLowerCase()]?.find(({ upToKv }) => kv <= upToKv);
}
