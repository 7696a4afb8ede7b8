import type { ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import { kilowatts } from './aggregates.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { ServedGenerator } from './one-phase-service.ts';
import { findOnePhaseServices } from './one-phase-service.ts';
import type { Screening } from './screening.ts';

const question = 'centre-tap-balance';

/**
 * Single-phase on a 240 V service: does it leave the two halves balanced? (SGIP 2.2.1.8.)
 * |what the project adds to the one half − to the other| over the kVA of the service transformer.
 */
export function answerCentreTapBalance(screening: Screening): Answered[] {
  const { served, untold } = findOnePhaseServices(screening);
  if (served.size === 0 && untold.length === 0) {
    const note = 'The project has no one-phase generator on a secondary of the utility.';
    return [answer(screening, question, 'not-applicable', { note })];
  }
  const findings = [...served].map(([transformer, generators]) =>
    judgeBalance(screening, transformer, generators),
  );
  const applicable = findings.filter(({ verdict }) => verdict !== 'not-applicable');
  return [
    ...(applicable.length > 0 || untold.length > 0 ? applicable : findings),
    ...untold.map(({ id }) => {
      const note = 'Which service transformer it is on is not known.';
      return answer(screening, question, 'needs-data', { element: id, note });
    }),
  ];
}

function judgeBalance(
  screening: Screening,
  { id: element, centreTapped, kva }: ServiceTransformer,
  generators: readonly ServedGenerator[],
): Answered {
  if (centreTapped === undefined) {
    const note = 'Whether its secondary has a centre tap is not known.';
    return answer(screening, question, 'needs-data', { element, note });
  }
  if (!centreTapped) {
    return answer(screening, question, 'not-applicable', { element, note: 'It has no centre tap.' });
  }
  const lacking = generators.filter(
    ({ tie }) => tie.firstHalfKw === undefined || tie.secondHalfKw === undefined,
  );
  if (lacking.length > 0) {
    const names = lacking.map(({ generator }) => generator.id).join(', ');
    const note = `What ${names} sends into each half of the service is not known.`;
    return answer(screening, question, 'needs-data', { element, note });
  }
  const first = generators.reduce((total, { tie }) => total + tie.firstHalfKw!, 0);
  const second = generators.reduce((total, { tie }) => total + tie.secondHalfKw!, 0);
  const working = new Working();
  const inputs = [
    working.given('P_1', 'The project into the first half', first, 'kW'),
    working.given('P_2', 'The project into the second half', second, 'kW'),
    working.given('S', `Nameplate of service transformer ${element}`, kva, 'kVA'),
  ];
  const value = (Math.abs(first - second) * 100) / kva;
  const words = { symbol: 'u', words: 'Imbalance that the project adds, over the nameplate', unit: '%' };
  working.compute(words, 'abs(P_1 - P_2) * 100 / S', inputs, value);
  return judge(screening, question, {
    element,
    value,
    note: `${kilowatts(first)} into one half and ${kilowatts(second)} into the other of a service transformer of ${kva} kVA.`,
    working: working.steps,
  });
}
