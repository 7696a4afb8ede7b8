import type { WorkingStep } from '../../../shared/schemas/working.ts';
import { allPhases } from '../case.ts';
import { add, magnitude, scale, sum } from '../complex.ts';
import type { FaultPoint } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import { projectKva } from '../project-size.ts';
import { findFaultPoint } from '../solve-case.ts';
import { Working } from '../working.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { findServedArea } from './upstream.ts';
import { describeWeakest } from './weakest-source.ts';

/** The grid's strength in one operating case, and what leans on it besides the project. */
type Measurement = { operating: OperatingCase; point: FaultPoint; kva: number; othersKva: number };

/**
 * Is the grid strong enough here for the project?
 * kV²/|Z1| from the weakest source, without inverters or machines, over the larger of the project and all inverters at
 * the place with it; the operating case in which that is least decides.
 */
export function answerShortCircuitRatio(screening: Screening): Answered[] {
  const { project } = screening;
  const own = projectKva(project);
  const measured = screening.cases.flatMap((operating) => measure(screening, operating));
  if (measured.length === 0 || own === 0) {
    const isFed = measured.length > 0;
    const note = isFed ? 'The project has no generator.' : 'No source feeds the point of interconnection.';
    return [answer(screening, 'short-circuit-ratio', isFed ? 'not-applicable' : 'needs-data', { note })];
  }
  const ratioOf = ({ kva, othersKva }: Measurement) => kva / (own + othersKva);
  const worst = measured.reduce((p, q) => (ratioOf(q) < ratioOf(p) * (1 - 1e-9) ? q : p));
  const { kva, othersKva, operating } = worst;
  const besides = othersKva > 0 ? ` and ${othersKva} kVA of inverters at the same place` : '';
  const before = Math.min(...measured.map((each) => each.kva / each.othersKva));
  const notes = [
    `${(kva / 1000).toFixed(1)} MVA from the weakest source, over ${own} kVA of the project${besides}.`,
    ...describeWeakest(screening),
    ...describeDeciding(screening.cases, operating),
  ];
  return [
    judge(screening, 'short-circuit-ratio', {
      element: project.node,
      value: ratioOf(worst),
      ...(before < Infinity ? { before } : {}),
      note: notes.join(' '),
      working: workRatio(screening, worst, own),
    }),
  ];
}

/** Measures one operating case; nothing where no source feeds the place in it. */
function measure(screening: Screening, operating: OperatingCase): Measurement[] {
  const { study, model, poi } = screening;
  const solved = operating.solver.solve('minimum', nodeAt(model, poi).kv);
  const point = findFaultPoint(solved, poi);
  if (!point) return [];
  const area = findServedArea(operating.upstream, model, poi);
  const othersKva = (study.feeder.inverters ?? [])
    .filter((inverter) => area[model.nodeIndex.get(inverter.node)!] && !solved.choice.out?.has(inverter.id))
    .reduce((total, inverter) => total + inverter.kva, 0);
  return [{ operating, point, kva: shortCircuitKva(point, model.baseMva, screening), othersKva }];
}

/** Three-phase fault power at nominal voltage; on a lateral that of the loop from line to ground. */
function shortCircuitKva(point: FaultPoint, baseMva: number, { model, poi }: Screening): number {
  const baseKva = baseMva * 1000;
  if (nodeAt(model, poi).phases === allPhases) return baseKva / magnitude(point.z1);
  if (!point.z0) return 0;
  const loop = add(scale(sum(point.z0, point.z1, point.z2), 1 / 3), point.self);
  return baseKva / 3 / magnitude(loop);
}

/** Writes down the fault power and what leans on it. */
function workRatio({ model, poi }: Screening, worst: Measurement, ownKva: number): readonly WorkingStep[] {
  const { point, kva, othersKva } = worst;
  const working = new Working();
  const { id, phases } = nodeAt(model, poi);
  const base = working.given('S_base', 'base power', model.baseMva * 1000, 'kVA');
  const z1 = working.given(
    'Z1',
    `positive-sequence impedance at ${id} from the weakest source`,
    point.z1,
    'pu',
  );
  const power = { symbol: 'S_sc', words: 'fault power at nominal voltage', unit: 'kVA' };
  const strength =
    phases === allPhases ? working.compute(power, 'S_base/abs(Z1)', [base, z1], kva) : workLoop();
  const own = working.given('S_p', 'nameplate of the project', ownKva, 'kVA');
  const others = working.given('S_o', 'inverters of others at the same place', othersKva, 'kVA');
  working.compute(
    { symbol: 'SCR', words: 'short-circuit ratio', unit: '' },
    'S_sc/(S_p + S_o)',
    [strength, own, others],
    kva / (ownKva + othersKva),
  );
  return working.steps;

  function workLoop() {
    if (!point.z0)
      return working.given('S_sc', 'nothing is earthed here: no line-to-ground current', 0, 'kVA');
    const z2 = working.given('Z2', 'negative-sequence impedance of the tap', point.z2, 'pu');
    const z0 = working.given('Z0', 'zero-sequence impedance of the tap', point.z0, 'pu');
    const path = working.given('Zp', 'self impedance of the path from the tap', point.self, 'pu');
    return working.compute(power, 'S_base/3/abs((Z0 + Z1 + Z2)/3 + Zp)', [base, z0, z1, z2, path], kva);
  }
}
