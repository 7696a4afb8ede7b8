import type { Substation } from '../../../shared/schemas/study-utility.ts';
import { branchAt } from '../model-parts.ts';
import { Working } from '../working.ts';
import { describeAggregate, explainAggregate, kilowatts, sumAggregate } from './aggregates.ts';
import { listGenerators } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';

const question = 'transient-stability';

/**
 * Is there a posted transient-stability limit, and is the total under it? (SGIP 2.2.1.9.)
 * Where one is posted: all generation of the model, which its substation passes on, with what else generates on the
 * transmission side of the substation's transformer.
 */
export function answerTransientStability(screening: Screening): Answered[] {
  const substation = findSubstation(screening);
  if (!substation) {
    const note = 'The substation that feeds this place is not known.';
    return [answer(screening, question, 'needs-data', { note })];
  }
  const { id: element, stabilityLimited, transmissionSideKw } = substation;
  if (stabilityLimited === undefined) {
    const note = 'Whether a transient-stability limitation is posted here is not known.';
    return [answer(screening, question, 'needs-data', { element, note })];
  }
  if (!stabilityLimited) {
    const note = 'No transient-stability limitation is posted here.';
    return [answer(screening, question, 'within', { element, note })];
  }
  const aggregate = sumAggregate(screening, question, listGenerators(screening));
  const working = new Working();
  const ours = explainAggregate(working, aggregate, ' on this substation');
  const otherKw = transmissionSideKw ?? 0;
  const others = `Other generation on the transmission side of ${element}`;
  const unknown = transmissionSideKw === undefined ? ', of which none is known' : '';
  const theirs = working.given('P_other', `${others}${unknown}`, otherKw, 'kW');
  const value = (aggregate.totalKw + otherKw) / 1000;
  const words = { symbol: 'P_all', words: 'All generation on the transmission side', unit: 'MW' };
  working.compute(words, '(P + P_other) / 1000', [ours, theirs], value);
  const judged = judge(screening, question, {
    element,
    value,
    before: (aggregate.connectedKw + otherKw) / 1000,
    note: `A limitation is posted here: ${describeAggregate(aggregate)}, and ${kilowatts(otherKw)} elsewhere on the transmission side.`,
    working: working.steps,
  });
  if (transmissionSideKw !== undefined || judged.verdict === 'outside') return [judged];
  const note = 'A limitation is posted here, and what else generates on the transmission side is not known.';
  return [answer(screening, question, 'needs-data', { element, note })];
}

/** The substation whose transformer is on the way to the source; else the only one that the study lists. */
function findSubstation({ study, model, upstream }: Screening): Substation | undefined {
  const { substations = [] } = study.feeder;
  const onPath = new Set(upstream.branches.map((branch) => branchAt(model, branch).id));
  const found = substations.find(({ transformer }) => transformer !== undefined && onPath.has(transformer));
  return found ?? (substations.length === 1 ? substations[0] : undefined);
}
