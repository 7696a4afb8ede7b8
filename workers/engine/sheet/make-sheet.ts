import type { Sheet, SheetDevice, SheetFault, SheetOrigin } from '../../../shared/schemas/sheets.ts';
import { sheetFormat } from '../../../shared/schemas/sheets.ts';
import type { FaultKind, StudyResult } from '../../../shared/schemas/study-result.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import type { Answered } from '../findings/judge.ts';
import type { Screening } from '../findings/screening.ts';
import { describeVoltageProfile } from '../flow/voltage-profile.ts';
import { baseAmps, baseOhms } from '../per-unit.ts';
import { findCoordination } from '../protection/coordination.ts';
import { findFaultPoint } from '../solve-case.ts';
import { Working } from '../working.ts';
import { baseSymbol, makeConversions } from './conversions.ts';
import { listFaultSteps } from './fault-steps.ts';
import { listNetworks, sheetStates } from './networks.ts';
import { listPath } from './path.ts';

/** What a worked study gives where it has a project. */
export type Worked = { screening: Screening; answers: readonly Answered[] };

/** Makes the working sheet of a study from what `workStudy` kept; nothing is solved again. */
export function makeSheet(result: StudyResult, { screening, answers }: Worked, origin: SheetOrigin): Sheet {
  const { study, ruleSet, model, poi, cases, states } = screening;
  const node = study.feeder.nodes[poi]!;
  const { code, number, name } = ruleSet;
  const conversions = makeConversions(screening, states.after.model);
  const voltage = describeVoltageProfile(screening);
  const ampsBase: Quantity = {
    symbol: baseSymbol('Ib', node.kv),
    words: `base current at ${node.kv} kV`,
    value: baseAmps(model.baseMva, node.kv),
    unit: 'A',
  };
  return {
    format: sheetFormat,
    study: study.name ?? '',
    origin,
    ruleSet: { code, number, name },
    method: study.options?.method ?? 'prefault',
    poi: { node: node.id, kv: node.kv, phases: node.phases },
    basis: listBasis(screening),
    path: listPath(screening, result),
    networks: listNetworks(screening, conversions),
    elements: conversions.elements.steps,
    faults: listFaults(screening, result, ampsBase),
    devices: (study.feeder.devices ?? []).flatMap((device) => describeDevice(device, result)),
    cases: cases.map((each) => each.name ?? 'The model as it stands'),
    findings: answers.map(({ working = [], ...finding }) => ({ finding, working })),
    ...(voltage && { voltage: [voltage] }),
    coordination: findCoordination(screening),
    warnings: result.warnings,
  };
}

/** The bases of every voltage on the way, and the voltage before a fault. */
function listBasis({ study, model, upstream, states }: Screening): readonly WorkingStep[] {
  const working = new Working();
  const power = working.given('Sb', 'base power, of the study', study.baseMva, 'MVA');
  const levels = [...new Set([...upstream.path].reverse().map((node) => model.nodes[node]!.kv))];
  for (const kv of levels) {
    const volts = working.given(baseSymbol('U', kv), `nominal voltage, line to line`, kv, 'kV');
    working.compute(
      { symbol: baseSymbol('Zb', kv), words: `base impedance at ${kv} kV`, unit: 'ohm' },
      `${volts.symbol}^2/Sb`,
      [volts, power],
      baseOhms(model.baseMva, kv),
    );
    working.compute(
      { symbol: baseSymbol('Ib', kv), words: `base current at ${kv} kV`, unit: 'A' },
      `Sb*1000/(sqrt(3)*${volts.symbol})`,
      [power, volts],
      baseAmps(model.baseMva, kv),
    );
  }
  const factor = states.after.choice.prefaultFactor;
  working.given('E', 'voltage behind every source and machine before a fault, over nominal', factor, 'pu');
  return working.steps;
}

const kinds: readonly FaultKind[] = ['threePhase', 'lineGround', 'lineLine', 'lineLineGround'];

function listFaults(
  { states, poi, project }: Screening,
  result: StudyResult,
  ampsBase: Quantity,
): SheetFault[] {
  const report = result.nodes[project.node]!;
  return kinds.flatMap((kind) => {
    const faults: SheetFault[] = [];
    for (const state of sheetStates) {
      const point = findFaultPoint(states[state], poi);
      const amps = report[state]?.[kind] ?? null;
      const steps = point && amps !== null ? listFaultSteps(point, kind, ampsBase, amps) : [];
      const same = faults.find(
        (each) => !each.sameAs && JSON.stringify(each.steps) === JSON.stringify(steps),
      );
      if (same && steps.length > 0) faults.push({ kind, state, amps, sameAs: same.state, steps: [] });
      else faults.push({ kind, state, amps, steps });
    }
    return faults;
  });
}

function describeDevice({ id, kind, branch, interruptingKa }: Device, result: StudyResult): SheetDevice[] {
  const duty = result.devices[id];
  if (!duty) return [];
  const { before, after, worst } = duty;
  const percent = (loading: number | null | undefined) => (loading == null ? null : loading * 100);
  return [
    {
      id,
      kind,
      branch,
      interruptingKa: interruptingKa ?? null,
      beforeDutyA: before.dutyA,
      afterDutyA: after?.dutyA ?? null,
      beforeAvailableA: before.availableA,
      afterAvailableA: after?.availableA ?? null,
      beforeLoadingPercent: percent(before.availableLoading),
      afterLoadingPercent: percent(after?.availableLoading),
      ...(worst && {
        worst: {
          scenario: worst.scenario,
          state: worst.state,
          availableA: worst.availableA,
          loadingPercent: percent(worst.availableLoading),
        },
      }),
    },
  ];
}
