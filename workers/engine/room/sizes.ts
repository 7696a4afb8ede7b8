import type { Comparison, Finding } from '../../../shared/schemas/findings.ts';
import type { RoomLimit, RoomSize } from '../../../shared/schemas/rooms.ts';
import type { Rule } from '../../../shared/schemas/rule-sets.ts';

/* The largest size that passes, found from how far each size is from its limit. */

/** SGIP is for generators up to 20 MW. */
export const mostKva = 20_000;
/** Where not even this passes there is no room. */
const smallestKva = 1;
/** Sizes are told apart to this share of themselves. */
const precision = 1e-4;

/**
 * What becomes of one size: whether it fails, at what, and by which share of the limit it is beyond it (below 0: within), which
 * only guides the search. Most quantities grow with the size as a straight line.
 */
export type Measured = { fails: boolean; beyond: number; limit: RoomLimit };
export type Test = (kva: number) => Measured;

/** Holds a value against the limits of a rule that are more than a note. */
export function measureRule(rule: Rule, value: number, limit: RoomLimit): Measured {
  const gaps = rule.limits
    .filter((each) => each.limit !== null && each.consequence !== 'note')
    .map((each) => ({ ...each, beyond: beyondOf(value, each.limit!, each.comparison) }));
  return {
    fails: gaps.some(({ beyond, comparison }) => (comparison === '<' ? beyond >= 0 : beyond > 0)),
    beyond: Math.max(-Infinity, ...gaps.map(({ beyond }) => beyond)),
    limit,
  };
}

/** The same of findings as they were answered: the one that is furthest beyond its limit, or nearest to it. */
export function measureFindings(findings: readonly Finding[]): Measured {
  let worst: Measured = { fails: false, beyond: -Infinity, limit: { question: '', element: null } };
  for (const { id, element = null, verdict, consequence, value, limit, comparison } of findings) {
    const fails = verdict === 'outside' && consequence !== 'note';
    const gap = value === null || limit === null ? undefined : beyondOf(value, limit, comparison);
    const beyond = gap ?? (fails ? Infinity : -Infinity);
    if (worst.fails && !fails) continue;
    if (beyond > worst.beyond || (fails && !worst.fails)) {
      worst = { fails, beyond, limit: { question: id, element } };
    }
  }
  return worst;
}

/** A lower bound is turned over, so that what falls as 1/size is a straight line too. */
function beyondOf(value: number, limit: number, comparison: Comparison): number {
  return comparison === '>=' ? limit / value - 1 : value / limit - 1;
}

/** Gives the largest size up to `most` that passes a test, and what binds there. */
export function shrink(most: RoomSize, test: Test): RoomSize {
  if (most.kva === 0) return most;
  let outside = { kva: most.kva, ...test(most.kva) };
  if (!outside.fails) return most;
  let within = { kva: smallestKva, ...test(smallestKva) };
  if (within.fails) return { kva: 0, bindsAt: within.limit };
  const look = (kva: number) => {
    if (kva <= within.kva || kva >= outside.kva) return;
    const found = { kva, ...test(kva) };
    if (found.fails) outside = found;
    else within = found;
  };
  while (outside.kva - within.kva > precision * outside.kva) {
    const guess = guessBetween(within, outside);
    // One look at each side of the guess closes in on it, where the line is straight.
    look(guess * (1 - precision / 3));
    look(guess * (1 + precision / 3));
    if (outside.kva - within.kva > precision * outside.kva) look((within.kva + outside.kva) / 2);
  }
  return { kva: within.kva, bindsAt: outside.limit };
}

type Looked = { kva: number } & Measured;

/** Where the line through both crosses the limit; the middle where there is no such line. */
function guessBetween(within: Looked, outside: Looked): number {
  const share = -within.beyond / (outside.beyond - within.beyond);
  const isLine = Number.isFinite(share) && share > 0 && share < 1;
  return within.kva + (isLine ? share : 0.5) * (outside.kva - within.kva);
}
