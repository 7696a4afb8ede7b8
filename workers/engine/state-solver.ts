import type { Scenario, Study } from '../../shared/schemas/study.ts';
import type { Model } from './case.ts';
import type { VoltageLevel } from './iec60909.ts';
import { correctImpedances, levelOf, voltageFactors } from './iec60909.ts';
import { atEquivalentFrequency } from './iec60909-peak.ts';
import { addMotorLoads } from './motor-load.ts';
import { prepareModel } from './prepare-model.ts';
import { choiceOfScenario } from './scenarios.ts';
import { solveAlike } from './solve-alike.ts';
import type { SolvedCase, TheveninCase } from './solve-case.ts';
import { solveCase } from './solve-case.ts';
import type { StateName } from './states.ts';
import { choiceOfState } from './states.ts';
import type { SeparateCases } from './x-over-r.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';
import { reduceSeparately, separateModels } from './x-over-r.ts';

/*
 * Which case answers for a fault: by the state, by the voltage of the faulted node (IEC 60909-0 has a factor for each
 * level), and for the duty of devices with the motors in the load where the study asks for them; once for the model as it
 * stands and once for each scenario.
 */

/** A case for the duty of devices, and the networks that give X/R in it; each is solved when first asked for. */
export type DutyCase = {
  readonly solved: SolvedCase;
  readonly frequencyHz: number;
  readonly separate: () => SeparateCases;
  /** With method "iec60909": the network at the equivalent frequency. */
  readonly equivalent?: () => TheveninCase;
};

export type DutyState = 'before' | 'after';

export type StateSolver = {
  /** What the case differs in from the model as it stands; nothing where it does not. */
  readonly scenario: Scenario | undefined;
  /** The case of a state for faults at nodes of this voltage. */
  readonly solve: (state: StateName, kv: number) => SolvedCase;
  readonly solveDuty: (state: DutyState, kv: number) => DutyCase;
};

/** Solvers of the model as it stands and of each scenario that the study lists. */
export type OperatingCases = { readonly base: StateSolver; readonly scenarios: readonly StateSolver[] };

type Network = { study: Study; model: Model };

/** Makes solvers that solve each case once; `model` is the study's. What they give lives as long as `arrays` do. */
export function makeStateSolvers(study: Study, model: Model, arrays: Arrays = newArrays): OperatingCases {
  const isIec = study.options?.method === 'iec60909';
  const hasMotors = study.options?.motorLoad === true;
  const prepare = (given: Study): Network => {
    const corrected = isIec ? correctImpedances(given) : given;
    return { study: corrected, model: corrected === study ? model : prepareModel(corrected) };
  };
  const largest = prepare(study);
  const forDuty = hasMotors ? once(() => prepare(addMotorLoads(study))) : () => largest;
  const separated = once(() => separateModels(forDuty().study, forDuty().model));
  const slowed = once(() => atEquivalentFrequency(forDuty().model));

  const levelAt = (kv: number): VoltageLevel => (isIec ? levelOf(kv) : 'high');

  const solverFor = (scenario?: Scenario): StateSolver => {
    const differs = scenario && choiceOfScenario(scenario);
    const choose = (state: StateName, level: VoltageLevel) => ({
      ...choiceOfState(state, isIec ? { ...study, prefaultFactor: voltageFactors(level, study) } : study),
      ...differs,
    });
    const solve = remember((level: VoltageLevel) =>
      remember((state: StateName) =>
        solveCase(state === 'minimum' ? model : largest.model, choose(state, level), arrays),
      ),
    );
    const solveDuty = remember((level: VoltageLevel) =>
      remember((state: DutyState): DutyCase => {
        const solved = hasMotors
          ? solveCase(forDuty().model, choose(state, level), arrays)
          : solve(level)(state);
        return {
          solved,
          frequencyHz: study.frequencyHz,
          separate: once(() => reduceSeparately(separated(), solved, arrays)),
          ...(isIec && { equivalent: once(() => solveAlike(solved, slowed(), arrays)) }),
        };
      }),
    );
    return {
      scenario,
      solve: (state, kv) => solve(levelAt(kv))(state),
      solveDuty: (state, kv) => solveDuty(levelAt(kv))(state),
    };
  };
  return { base: solverFor(), scenarios: (study.feeder.scenarios ?? []).map(solverFor) };
}

function once<R>(compute: () => R): () => R {
  const get = remember((_: 'only') => compute());
  return () => get('only');
}

function remember<K extends string, R>(compute: (key: K) => R): (key: K) => R {
  const known = new Map<K, R>();
  return (key) => {
    let value = known.get(key);
    if (value === undefined) known.set(key, (value = compute(key)));
    return value;
  };
}
