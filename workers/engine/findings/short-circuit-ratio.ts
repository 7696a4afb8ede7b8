import type { Finding } from '../../../shared/schemas/findings.ts';
import { allPhases } from '../case.ts';
import { add, magnitude, scale, sum } from '../complex.ts';
import type { FaultPoint } from '../faults.ts';
import { projectKva } from '../project-size.ts';
import { findFaultPoint } from '../solve-case.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { findServedArea } from './upstream.ts';

/**
 * Is the grid strong enough here for the project?
 * kV²/|Z1| from the weakest source, without inverters or machines, over the larger of the project and all inverters at
 * the place with it.
 */
export function answerShortCircuitRatio(screening: Screening): Finding[] {
  const { study, project, model, states, poi } = screening;
  const point = findFaultPoint(states.minimum, poi);
  const own = projectKva(project);
  if (!point || own === 0) {
    const note = point ? 'The project has no generator.' : 'No source feeds the point of interconnection.';
    return [answer(screening, 'short-circuit-ratio', point ? 'not-applicable' : 'needs-data', { note })];
  }
  const kva = shortCircuitKva(point, model.baseMva, screening);
  const area = findServedArea(screening.upstream, model, poi);
  const others = (study.feeder.inverters ?? []).filter(({ node }) => area[model.nodeIndex.get(node)!]);
  const othersKva = others.reduce((total, inverter) => total + inverter.kva, 0);
  const besides = othersKva > 0 ? ` and ${othersKva} kVA of inverters at the same place` : '';
  return [
    judge(screening, 'short-circuit-ratio', {
      element: project.node,
      value: kva / (own + othersKva),
      ...(othersKva > 0 ? { before: kva / othersKva } : {}),
      note: `${(kva / 1000).toFixed(1)} MVA from the weakest source, over ${own} kVA of the project${besides}.`,
    }),
  ];
}

/** Three-phase fault power at nominal voltage; on a lateral that of the loop from line to ground. */
function shortCircuitKva(point: FaultPoint, baseMva: number, { model, poi }: Screening): number {
  const baseKva = baseMva * 1000;
  if (model.nodes[poi]!.phases === allPhases) return baseKva / magnitude(point.z1);
  if (!point.z0) return 0;
  const loop = add(scale(sum(point.z0, point.z1, point.z2), 1 / 3), point.self);
  return baseKva / 3 / magnitude(loop);
}
