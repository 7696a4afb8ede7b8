import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import type { Complex } from '../complex.ts';
import { Working } from '../working.ts';
import type { Conversions } from './conversions.ts';
import { convertBranches, convertTie, findKindOfLine } from './conversions.ts';
import type { Sequence, TreeNode } from './sequence-tree.ts';

/*
 * Adds a sequence network up to one impedance, as steps: series impedances along the way are summed, and where ties to earth
 * meet they are put in parallel. What branches off the main way and has many parts is given as one number.
 */

/** The most terms in one sum; longer ones are made in parts. */
const mostTerms = 12;

/** The most ties and branches that are followed one by one off the main way. */
const mostOffTheWay = 10;

/** To earth from a place outwards: impedances in series that wait to be summed, and lines of one kind after them. */
type Chain = { terms: Quantity[]; run: { kind: string; branches: number[] } | undefined };

/**
 * `tree` is seen from the place asked about and has a way to earth; `onWay` are the nodes between it and the source.
 * `z` is what the solver gives, which the last step must come to. Steps of elements go where `conversions` keeps them.
 */
export function reduceTree(
  conversions: Conversions,
  tree: TreeNode,
  sequence: Sequence,
  onWay: ReadonlySet<number>,
  z: Complex,
): readonly WorkingStep[] {
  const { model } = conversions;
  const working = new Working();
  const name = sequence.toUpperCase();
  const chains = new Map<TreeNode, Chain>();
  const compute = (isLast: boolean, words: string, formula: string, terms: Quantity[], value: Complex) =>
    working.compute(
      { symbol: isLast ? name : `${name}_${conversions.nextNumber()}`, words, unit: 'pu' },
      formula,
      terms,
      value,
    );
  /** The terms of a chain, twelve at most: what is more is summed first. */
  const shorten = (chain: Chain): Quantity[] => {
    endRun(conversions, chain, sequence);
    let left = chain.terms;
    while (left.length > mostTerms) {
      const part = left.slice(0, mostTerms);
      left = [compute(false, 'so far', sumUp(part), part, sumOf(part)), ...left.slice(mostTerms)];
    }
    return left;
  };
  const close = (chain: Chain, words: string): Quantity => {
    const terms = shorten(chain);
    return terms.length === 1 ? terms[0]! : compute(false, words, sumUp(terms), terms, sumOf(terms));
  };

  for (const each of listFollowed(tree, onWay)) {
    const { id } = model.nodes[each.node]!;
    const isLast = each === tree;
    const meeting = each.children.map(({ branch, child }): Chain => {
      const chain = chains.get(child) ?? startChain(giveWhole(conversions, working, sequence, child));
      if (branch !== -1) goOn(conversions, chain, branch, sequence);
      return chain;
    });
    for (const tie of each.ties) meeting.push(startChain(convertTie(conversions, tie, sequence, each.node)));
    if (meeting.length === 1 && !isLast) chains.set(each, meeting[0]!);
    else if (meeting.length === 1) {
      const terms = shorten(meeting[0]!);
      compute(true, `the whole network, seen from ${id}`, sumUp(terms), terms, z);
    } else {
      const parts = meeting.map((chain) => close(chain, `on the way to ${id}`));
      const formula = `1/(${parts.map(({ symbol }) => `1/${symbol}`).join(' + ')})`;
      const words = isLast ? `the whole network, seen from ${id}` : `in parallel at ${id}`;
      chains.set(each, startChain(compute(isLast, words, formula, parts, isLast ? z : each.z!)));
    }
  }
  return working.steps;
}

function startChain(term: Quantity): Chain {
  return { terms: [term], run: undefined };
}

/** Puts a branch in series; lines of one kind wait for the next of their kind. */
function goOn(conversions: Conversions, chain: Chain, branch: number, sequence: Sequence): void {
  const kind = findKindOfLine(conversions, branch, sequence);
  if (kind !== undefined && chain.run?.kind === kind) {
    chain.run.branches.push(branch);
    return;
  }
  endRun(conversions, chain, sequence);
  if (kind === undefined) chain.terms.push(...convertBranches(conversions, [branch], sequence));
  else chain.run = { kind, branches: [branch] };
}

function endRun(conversions: Conversions, chain: Chain, sequence: Sequence): void {
  if (chain.run) chain.terms.push(...convertBranches(conversions, chain.run.branches, sequence));
  chain.run = undefined;
}

function sumUp(terms: readonly Quantity[]): string {
  return terms.map(({ symbol }) => symbol).join(' + ');
}

/** The nodes whose parts are shown, outermost first. */
function listFollowed(tree: TreeNode, onWay: ReadonlySet<number>): TreeNode[] {
  const followed = [tree];
  for (let head = 0; head < followed.length; head++) {
    for (const { child } of followed[head]!.children) {
      if (onWay.has(child.node) || child.size <= mostOffTheWay) followed.push(child);
    }
  }
  return followed.reverse();
}

function giveWhole(
  { model, nextNumber }: Conversions,
  working: Working,
  sequence: Sequence,
  { node, z }: TreeNode,
): Quantity {
  const words = `all that is beyond ${model.nodes[node]!.id}, added up the same way`;
  return working.given(`${sequence}_${nextNumber()}`, words, z!, 'pu');
}

function sumOf(terms: readonly Quantity[]): Complex {
  let re = 0;
  let im = 0;
  for (const { value } of terms) {
    re += typeof value === 'number' ? value : value.re;
    im += typeof value === 'number' ? 0 : value.im;
  }
  return { re, im };
}

/** Whether two ways to a number agree but for rounding. */
export function agree(p: Complex, q: Complex): boolean {
  const size = Math.hypot(p.re, p.im) + Math.hypot(q.re, q.im);
  return Math.hypot(p.re - q.re, p.im - q.im) <= 1e-9 * size;
}
