import type { ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import { limitedTo, numberOf, sourceOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';
import type { Generator, Tied } from './service-generators.ts';
import { findConnected, impedanceOf, notConnectedNote } from './service-generators.ts';

const id = 'service';

/** The fault current at the customer's panel over what it can interrupt, from an unlimited primary. */
export function answerServicePanel(
  screening: Screening,
  transformer: ServiceTransformer,
  tied: readonly Tied[],
): Answered {
  const element = `${transformer.id} (panel)`;
  const [limit] = ruleOf(screening, id).limits;
  const limited = limitedTo(screening, id, {
    limit: limit.limit!,
    comparison: limit.comparison,
    unit: '%',
    source: sourceOf(screening, id, 'panelSource'),
  });
  const lack = (note: string) => answer(limited, id, 'needs-data', { element, note });
  const z = impedanceOf(transformer);
  if (!z) return lack('The impedance of this transformer is not known.');
  const others = listOthers(screening, transformer);
  if (!others) return lack(notConnectedNote);
  const ratingOf = ({ tie }: Tied) => tie.panelInterruptingKa ?? screening.project.panelInterruptingKa;
  const unknown = tied.find((each) => ratingOf(each) === undefined);
  if (unknown) return lack(`What the panel of ${unknown.generator.id} can interrupt is not known.`);
  const ratingKa = Math.min(...tied.map((each) => ratingOf(each)!));
  const isThreePhase = (transformer.phases ?? 'A').length === 3;
  const factor = transformer.centreTapped ? numberOf(screening, id, 'halfWindingFactor') : 1;
  const volts = transformer.secondaryV;
  const size = Math.hypot(z.re, z.im);
  const currentOf = (kva: number, perUnit: number) =>
    (perUnit * kva * 1000) / ((isThreePhase ? Math.sqrt(3) : 1) * volts);
  const addUp = (generators: readonly Generator[]) =>
    generators.reduce((sum, each) => sum + currentOf(each.kva, faultPerUnit(each)), 0);
  const own = addUp(tied.map(({ generator }) => generator));
  const recorded = transformer.generationKw ?? 0;
  const besides = addUp(others) + currentOf(recorded, recordedFaultPu);
  const working = new Working();
  const u = working.given('U_n', 'Voltage of the secondary', volts, 'V');
  const zt = working.given('Z_t', 'Impedance of the transformer, seen from there', size, 'ohm');
  const k = working.given('k', 'From line to the middle over between lines; 1 without a middle', factor, '');
  const amps = (factor * volts) / ((isThreePhase ? Math.sqrt(3) : 1) * size);
  const grid = working.compute(
    { symbol: 'I_t', words: 'Through the transformer from an unlimited primary', unit: 'A' },
    isThreePhase ? 'k*U_n/(sqrt(3)*Z_t)' : 'k*U_n/Z_t',
    [k, u, zt],
    amps,
  );
  const fromOthers = working.given('I_o', 'From other generators on it, in magnitude', besides, 'A');
  const fromOwn = working.given('I_g', "From the project's generators, in magnitude", own, 'A');
  const rating = working.given('I_r', 'What the panel can interrupt', ratingKa * 1000, 'A');
  const value = ((amps + besides + own) / (ratingKa * 1000)) * 100;
  working.compute(
    { symbol: 'loading', words: 'Fault current over the rating', unit: '%' },
    '(I_t + I_o + I_g)/I_r*100',
    [grid, fromOthers, fromOwn, rating],
    value,
  );
  return judge(limited, id, {
    element,
    value,
    before: ((amps + besides) / (ratingKa * 1000)) * 100,
    working: working.steps,
    note: [
      `${((amps + besides + own) / 1000).toFixed(2)} kA at the terminals of the transformer against ${ratingKa} kA; what secondary and drop take off is not counted.`,
      ...(recorded > 0
        ? [
            `${recorded} kW recorded for it count with ${recordedFaultPu} times their rated current, as inverters.`,
          ]
        : []),
    ].join(' '),
  });
}

/** Fault current over rated current of what is recorded for a service transformer in kW alone (common practice, no source). */
const recordedFaultPu = 1.2;

/** Generators of others on the transformer, as the model lists them; nothing where what is on it is not known. */
function listOthers(screening: Screening, transformer: ServiceTransformer): Generator[] | undefined {
  if (!findConnected(screening, transformer)) return undefined;
  const { machines = [], inverters = [] } = screening.study.feeder;
  return [...machines, ...inverters].filter(({ service }) => service?.transformer === transformer.id);
}

/** Of an inverter its fault current, of a machine one over its reactance. */
function faultPerUnit(generator: Generator): number {
  return 'faultCurrentPu' in generator ? generator.faultCurrentPu : 1 / generator.xSubtransientPu;
}
