import type { Screening } from './screening.ts';

/** How many sources are named before they are only counted. */
const mostNamed = 3;

/**
 * Says where the weakest source is not as weak as it may be: a source without a minimum strength stands with its maximum in
 * what is computed with the weakest.
 */
export function describeWeakest({ study }: Pick<Screening, 'study'>): string[] {
  const names = (study.feeder.sources ?? []).filter(({ min }) => !min).map(({ id }) => id);
  if (names.length === 0) return [];
  const whose =
    names.length > mostNamed
      ? `${names.length} sources`
      : `source${names.length === 1 ? '' : 's'} ${names.join(', ')}`;
  return [`No minimum strength of ${whose} is recorded: the maximum was used in its place.`];
}
