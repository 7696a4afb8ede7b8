import { nodeAt } from '../model-parts.ts';
import { projectKva } from '../project-size.ts';
import type { FlowLoad } from '../flow/injections.ts';
import { voltageAt } from '../flow/solve-flow.ts';
import type { VoltageCases } from '../flow/voltage-cases.ts';
import { flowLoads, voltageCasesOf } from '../flow/voltage-cases.ts';
import { Working } from '../working.ts';
import { listFedCases, notFedNote } from './fed-cases.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { answerRange } from './voltage-range.ts';

const id = 'steady-voltage';

export type Solved = { operating: OperatingCase; cases: VoltageCases };

type Rise = { load: FlowLoad; phase: number; before: number; after: number; isHeld: boolean };

/**
 * Does the steady voltage stay in range along the section and at the connection?
 * Load flows at minimum and at peak load, without and with the project, all generation at full export, regulators and
 * capacitors as set. Two findings: the rise at the point of interconnection, the larger of before and after controls have
 * moved; and the node, of all that the same substation's bus feeds, whose voltage is furthest out of range or nearest to it.
 */
export function answerSteadyVoltage(screening: Screening): Answered[] {
  const { study, project, cases } = screening;
  if (projectKva(project) === 0) {
    return [answer(screening, id, 'not-applicable', { note: 'The project has no generator.' })];
  }
  if (!study.feeder.loads?.length) {
    return [
      answer(screening, id, 'needs-data', { note: 'The model has no loads, so no load flow can be made.' }),
    ];
  }
  const solved: Solved[] = [];
  const fed = listFedCases(screening);
  if (fed.length === 0)
    return [answer(screening, id, 'needs-data', { element: project.node, note: notFedNote })];
  for (const operating of fed) {
    const answered = voltageCasesOf(screening, operating);
    if ('failure' in answered) {
      const note = [answered.failure, ...describeDeciding(cases, operating)].join(' ');
      return [answer(screening, id, 'needs-data', { element: project.node, note })];
    }
    solved.push({ operating, cases: answered });
  }
  return [answerRise(screening, solved), ...answerRange(screening, solved)];
}

function answerRise(screening: Screening, solved: readonly Solved[]): Answered {
  const { model, poi, cases } = screening;
  const rises = solved.flatMap(({ operating, cases: flows }) => {
    const rise = findRise(flows, poi);
    return rise ? [{ operating, ...rise }] : [];
  });
  const element = `${nodeAt(model, poi).id} (rise)`;
  if (rises.length === 0) return answer(screening, id, 'needs-data', { element, note: notFedNote });
  const worst = rises.reduce((p, q) => (q.after - q.before > p.after - p.before + 1e-9 ? q : p));
  const working = new Working();
  const when = `phase ${'ABC'[worst.phase]!}, ${worst.load} load`;
  const { kv } = nodeAt(model, poi);
  const volts = (pu: number) => (pu * kv * 1000) / Math.sqrt(3);
  working.given('U_before', `Voltage to neutral without the project, ${when}`, volts(worst.before), 'V');
  const step = volts(worst.after - worst.before);
  const higher = working.given('dU', 'By how much it is higher with the project, by load flow', step, 'V');
  const nominal = working.given('U_n', 'Nominal voltage between phases there', kv, 'kV');
  const value = (worst.after - worst.before) * 100;
  working.compute(
    { symbol: 'rise', words: 'Rise of the voltage, of nominal', unit: '%' },
    'dU/(U_n*1000/sqrt(3))*100',
    [higher, nominal],
    value,
  );
  const controls = worst.isHeld
    ? 'before regulators and capacitors move'
    : 'with regulators and capacitors settled';
  return judge(screening, id, {
    element,
    value,
    working: working.steps,
    note: [
      `From ${worst.before.toFixed(4)} to ${worst.after.toFixed(4)} of nominal, ${when}, ${controls}.`,
      ...describeDeciding(cases, worst.operating),
    ].join(' '),
  });
}

/** The largest rise at a node in one operating case. */
export function findRise(cases: VoltageCases, node: number): Rise | undefined {
  let worst: Rise | undefined;
  for (const load of flowLoads) {
    for (const isHeld of [true, false]) {
      const with_ = isHeld ? cases.held[load] : cases[`${load}-after`];
      for (let phase = 0; phase < 3; phase++) {
        const before = voltageAt(cases[`${load}-before`], node, phase);
        const after = voltageAt(with_, node, phase);
        if (before === null || after === null) continue;
        if (!worst || after - before > worst.after - worst.before + 1e-9)
          worst = { load, phase, before, after, isHeld };
      }
    }
  }
  return worst;
}
