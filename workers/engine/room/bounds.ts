import type { RoomLimit } from '../../../shared/schemas/rooms.ts';
import type { Rule } from '../../../shared/schemas/rule-sets.ts';
import type { Measured, Test } from './sizes.ts';

/* Sizes up to which a question is answered well, where a formula gives them without a search. */

/** What fails for every size above `kva`, or for that size too where the limit is strict. */
export type Bound = { kva: number; limit: RoomLimit; isStrict?: boolean };

/** The limits of a rule that are more than a note. */
export function listDeciding({ limits }: Rule) {
  return limits.flatMap(({ limit, comparison, consequence }) =>
    limit === null || consequence === 'note' ? [] : [{ limit, isStrict: comparison === '<' }],
  );
}

export function lowest(bounds: readonly Bound[]): Bound | undefined {
  return bounds.reduce<Bound | undefined>((p, q) => (p === undefined || q.kva < p.kva ? q : p), undefined);
}

/** Tests sizes against a bound; all pass where there is none. */
export function testOf(bound: Bound | undefined): Test {
  if (!bound) return () => ({ fails: false, beyond: -Infinity, limit: { question: '', element: null } });
  const { kva: most, limit, isStrict = false } = bound;
  return (kva): Measured => ({
    fails: isStrict ? kva >= most : kva > most,
    beyond: most > 0 ? kva / most - 1 : Infinity,
    limit,
  });
}
