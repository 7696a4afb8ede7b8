import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import type { Regulator, Substation } from '../../../shared/schemas/study-utility.ts';
import type { Model } from '../case.ts';
import type { Rated } from '../findings/export-ratings.ts';
import { ratingsAt } from '../findings/export-ratings.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import type { Screening } from '../findings/screening.ts';
import { traceCuts } from '../findings/upstream.ts';
import type { NetExport } from '../flow/net-export.ts';
import { addUpExports } from '../flow/net-export.ts';
import type { Bound } from './bounds.ts';
import { listDeciding, lowest } from './bounds.ts';

/*
 * How much may flow back from a node, as findings/reverse-flow.ts measures it: a plant at unity power factor adds a third of its
 * size to each phase of everything on the way to the source.
 */

const id = 'reverse-flow';

export type ReverseBound = {
  bound: Bound | undefined;
  /** Above this size something flows back through what is not known well enough. */
  openAbove: number;
};

/** A branch on the way, or the bank behind it. */
type Passed = {
  ratings: readonly Rated[];
  regulators: readonly Regulator[];
  substations: readonly Substation[];
};

/** What fails, and what is open, above which size. */
type Found = { outside: Bound[]; open: Map<string, number>; hasRating: boolean };

/** Makes a finder of each node's bound; `screening` is of no node in particular. */
export function makeReverseBounds(study: Study, model: Model, ruleSet: RuleSet) {
  const rule = ruleSet.rules[id];
  const limits = rule ? listDeciding(rule) : [];
  const controlsCount = rule !== undefined && rule.limits[0].consequence !== 'note';
  const known = new Map<number, Passed>();
  const { regulators = [], substations = [] } = study.feeder;
  const unmodelled = substations.length === 1 && !substations[0]!.transformer ? substations[0]! : undefined;

  function passedAt(screening: Screening, branch: number): Passed {
    let passed = known.get(branch);
    if (!passed) {
      const name = model.branches[branch]!.id;
      passed = {
        ratings: ratingsAt(screening, branch),
        regulators: regulators.filter((each) => each.branch === name),
        substations: substations.filter(({ transformer }) => transformer === name),
      };
      known.set(branch, passed);
    }
    return passed;
  }

  function pass({ ratings, regulators, substations }: Passed, sum: NetExport, found: Found): void {
    const reversesAbove = -3 * Math.max(...sum.kw);
    const openUp = (element: string, above: number) =>
      found.open.set(element, Math.min(above, found.open.get(element) ?? Infinity));
    const bar = (element: string, above: number, isBarred: boolean) => {
      if (!isBarred) openUp(element, above);
      else if (controlsCount) found.outside.push({ kva: above, limit: { question: id, element } });
    };
    for (const { id: element, reverse } of regulators) {
      if (reverse === 'bidirectional' || reverse === 'cogeneration') continue;
      bar(element, reversesAbove, reverse === 'locked');
    }
    for (const { id: element, reverseFlow, minimumKw } of substations) {
      if (reverseFlow === true) continue;
      // Where loads are not known one by one, what was measured of them all counts.
      const minimum = sum.unknownLoads > 0 && minimumKw !== undefined ? minimumKw : sum.loadKw;
      bar(element, Math.max(reversesAbove, minimum - sum.generationKw), reverseFlow === false);
    }
    for (const rated of ratings) {
      const phaseKva = phaseRating(rated);
      if (phaseKva === undefined) {
        openUp(rated.element, reversesAbove);
        continue;
      }
      found.hasRating = true;
      for (const { limit, isStrict } of limits) {
        const kva = sizeAt(sum, (phaseKva * limit) / 100);
        // What is too much without these loads need not be with them.
        if (sum.unknownLoads > 0) openUp(`${rated.element} (loading)`, kva);
        else {
          const noted = (found.open.get(rated.element) ?? Infinity) < kva;
          const element = noted ? `${rated.element} (loading)` : rated.element;
          found.outside.push({ kva, limit: { question: id, element }, isStrict });
        }
      }
    }
  }

  /** `fed` are the operating cases in which a source feeds the node; nothing where a loop leaves the way open. */
  return (screening: Screening, fed: readonly OperatingCase[]): ReverseBound | undefined => {
    if (!rule) return { bound: undefined, openAbove: Infinity };
    const found: Found = { outside: [], open: new Map(), hasRating: false };
    for (const { solver, upstream } of fed) {
      const cuts = traceCuts(upstream);
      const { branches, path, isSource } = upstream;
      if (cuts.isCut.includes(0)) return undefined;
      if (branches.length === 0) {
        // At a source itself nothing lies on the way; whether several meet there is not looked into.
        if (isSource.reduce((count, one) => count + one, 0) > 1) return undefined;
        continue;
      }
      const { choice } = solver.solve('before', model.nodes[path[0]!]!.kv);
      const sums = addUpExports({ study, model }, choice, cuts, branches.length);
      branches.forEach((branch, place) => pass(passedAt(screening, branch), sums[place]!, found));
      // A bank that the model does not have stands behind its source.
      if (unmodelled) {
        const { id: element, kva } = unmodelled;
        const rated = { element, kv: model.nodes[path.at(-1)!]!.kv, kva };
        pass({ ratings: [rated], regulators: [], substations: [unmodelled] }, sums.at(-1)!, found);
      }
    }
    const openAbove = found.hasRating ? Math.min(Infinity, ...found.open.values()) : -Infinity;
    return { bound: lowest(found.outside), openAbove };
  };
}

/** What one phase may carry, in kVA; nothing where no rating is known. */
function phaseRating({ kv, amps, kva }: Rated): number | undefined {
  if (kva !== undefined) return kva / 3;
  return amps === undefined ? undefined : (amps * kv) / Math.sqrt(3);
}

/** The size of plant at which the first phase that flows back is loaded as much. */
function sizeAt({ kw, kvar }: NetExport, phaseKva: number): number {
  const room = [0, 1, 2].map(
    (phase) => 3 * (Math.sqrt(Math.max(0, phaseKva ** 2 - kvar[phase]! ** 2)) - kw[phase]!),
  );
  return Math.min(...room);
}
