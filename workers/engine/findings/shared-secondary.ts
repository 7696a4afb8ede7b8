import type { ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import { describeAggregate, explainAggregate, kilowatts, sumAggregate } from './aggregates.ts';
import { listGenerators } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { findOnePhaseServices, serviceOf } from './one-phase-service.ts';
import type { Screening } from './screening.ts';

const question = 'shared-secondary';

/**
 * Single-phase on a shared secondary: is all of it together small? (SGIP 2.2.1.7.)
 * For each shared service transformer of the project's one-phase generators: all generation on its secondary.
 */
export function answerSharedSecondary(screening: Screening): Answered[] {
  const { served, untold } = findOnePhaseServices(screening);
  if (served.size === 0 && untold.length === 0) {
    const note = 'The project has no one-phase generator on a secondary of the utility.';
    return [answer(screening, question, 'not-applicable', { note })];
  }
  const findings = [...served.keys()].map((transformer) => judgeSecondary(screening, transformer));
  const applicable = findings.filter(({ verdict }) => verdict !== 'not-applicable');
  return [
    ...(applicable.length > 0 || untold.length > 0 ? applicable : findings),
    ...untold.map(({ id }) => {
      const note = 'Which service transformer it is on is not known.';
      return answer(screening, question, 'needs-data', { element: id, note });
    }),
  ];
}

function judgeSecondary(screening: Screening, transformer: ServiceTransformer): Answered {
  const { id: element, shared, generationKw = 0 } = transformer;
  if (shared === undefined) {
    const note = 'Whether more than one customer is on its secondary is not known.';
    return answer(screening, question, 'needs-data', { element, note });
  }
  if (!shared) {
    const note = 'Its secondary serves one customer alone.';
    return answer(screening, question, 'not-applicable', { element, note });
  }
  const generators = listGenerators(screening).filter((each) => serviceOf(each)?.transformer === element);
  const aggregate = sumAggregate(screening, question, generators);
  const working = new Working();
  const listed = explainAggregate(working, aggregate, ` on the secondary of ${element}`);
  const others = working.given('P_recorded', 'Of small customers, as recorded for it', generationKw, 'kW');
  const value = aggregate.totalKw + generationKw;
  const words = { symbol: 'P_all', words: 'All generation on the secondary', unit: 'kW' };
  working.compute(words, 'P + P_recorded', [listed, others], value);
  const recorded = generationKw > 0 ? `; ${kilowatts(generationKw)} are recorded for it besides` : '';
  return judge(screening, question, {
    element,
    value,
    before: aggregate.connectedKw + generationKw,
    note: `${describeAggregate(aggregate)} on its secondary${recorded}.`,
    working: working.steps,
  });
}
