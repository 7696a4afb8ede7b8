import type { VoltageCaseName } from '../../../shared/schemas/voltage-profile.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { nodeAt } from '../model-parts.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import type { Screening } from '../findings/screening.ts';
import type { ControlState } from './flow-controls.ts';
import type { FlowLoad } from './injections.ts';
import type { Flow, FlowFailure, PreparedFlow } from './solve-flow.ts';
import { prepareFlow, solveFlow } from './solve-flow.ts';

/*
 * The load flows that tell what a project does to the voltage in one operating case: at minimum and at peak load, without
 * and with it, all generation at full export. Controls start from where they stand without generation.
 */

/** `held` is with the project before any regulator or capacitor has moved. */
export type VoltageCases = Record<VoltageCaseName, Flow> & { held: Record<FlowLoad, Flow> };

export const flowLoads = ['minimum', 'peak'] as const satisfies readonly FlowLoad[];

type Place = Pick<Screening, 'model' | 'poi'>;

/** The networks of a case without and with the project, laid out once. */
export type PreparedVoltages = { before: PreparedFlow; after: PreparedFlow };

export function prepareVoltages(
  study: Study,
  { model, poi }: Place,
  { solver }: OperatingCase,
): PreparedVoltages {
  const choice = (state: 'before' | 'after') => solver.solve(state, nodeAt(model, poi).kv).choice;
  return {
    before: prepareFlow(study, model, choice('before')),
    after: prepareFlow(study, model, choice('after')),
  };
}

/** Solves all flows of a case, or says for which one there is no answer. */
export function solveVoltageCases(prepared: PreparedVoltages): VoltageCases | FlowFailure {
  const solved: Partial<Record<VoltageCaseName, Flow>> = {};
  const held: Partial<Record<FlowLoad, Flow>> = {};
  for (const load of flowLoads) {
    const answer = solveAtLoad(prepared, load);
    if ('failure' in answer) return answer;
    solved[`${load}-before`] = answer.before;
    solved[`${load}-after`] = answer.after;
    held[load] = answer.held;
  }
  return { ...(solved as Record<VoltageCaseName, Flow>), held: held as Record<FlowLoad, Flow> };
}

function solveAtLoad(
  { before, after }: PreparedVoltages,
  load: FlowLoad,
): { before: Flow; held: Flow; after: Flow } | FlowFailure {
  const isControlled = hasControls(after);
  let start: ControlState | undefined;
  if (isControlled) {
    const idle = solveFlow(before, { load, withGeneration: false, controls: 'settle' });
    if ('failure' in idle) return named(idle, `at ${load} load without any generation`);
    start = idle.state;
  }
  const without = solveFlow(before, { load, withGeneration: true, controls: 'settle', start });
  if ('failure' in without) return named(without, `at ${load} load without the project`);
  start = without.state;
  const held = solveFlow(after, { load, withGeneration: true, controls: 'held', start });
  if ('failure' in held) return named(held, `at ${load} load with the project, before controls move`);
  // Where nothing moves by itself, that is the end of it.
  if (!isControlled) return { before: without, held, after: held };
  const settled = solveFlow(after, { load, withGeneration: true, controls: 'settle', start });
  if ('failure' in settled) return named(settled, `at ${load} load with the project`);
  return { before: without, held, after: settled };
}

function hasControls({ regulators, study }: PreparedFlow): boolean {
  const switched = [...(study.feeder.capacitors ?? []), ...(study.project?.capacitors ?? [])];
  return regulators.length > 0 || switched.some(({ switchedByVoltage }) => switchedByVoltage !== undefined);
}

function named({ failure }: FlowFailure, when: string): FlowFailure {
  return { failure: `${failure} (Load flow ${when}.)` };
}

const known = new WeakMap<OperatingCase, VoltageCases | FlowFailure>();

/** As above for a case of a screening; solved once. */
export function voltageCasesOf(screening: Screening, operating: OperatingCase): VoltageCases | FlowFailure {
  let cases = known.get(operating);
  if (!cases)
    known.set(operating, (cases = solveVoltageCases(prepareVoltages(screening.study, screening, operating))));
  return cases;
}
