import type { Grounding, NodeState, PerFault, ProjectResult } from '../../shared/schemas/study-result.ts';
import type { Project } from '../../shared/schemas/study.ts';
import { allPhases } from './case.ts';
import type { CaseChoice, Model } from './case.ts';
import { judgeGrounding } from './grounding.ts';
import { nodeAt } from './model-parts.ts';
import { projectKva } from './project-size.ts';
import type { SolvedCase } from './solve-case.ts';
import { findFaultPoint, withCase } from './solve-case.ts';

/* What a study reports of the project: ratios at its point of interconnection, and the grounding there. */

/** Gives the ratios of the fault currents at the point of interconnection in the three states. */
export function reportProject(
  project: Project,
  model: Model,
  currents: Record<'none' | 'before' | 'after', NodeState>,
): ProjectResult {
  const { none, before, after } = currents;
  const perFault = (ratio: (kind: keyof PerFault) => number | null): PerFault => ({
    threePhase: ratio('threePhase'),
    lineGround: ratio('lineGround'),
  });
  return {
    node: project.node,
    faultLevelRatio: perFault((kind) => over(after[kind], before[kind])),
    aggregateContribution: perFault((kind) => {
      const ratio = over(after[kind], none[kind]);
      return ratio === null ? null : ratio - 1;
    }),
    shortCircuitRatio: shortCircuitRatio(project, model, before),
  };
}

function over(current: number | null, base: number | null): number | null {
  return current === null || !base ? null : current / base;
}

/** Fault power before over the project's: √3·kV·I of three phases, on a lateral kV/√3·I of line to ground. */
function shortCircuitRatio(project: Project, model: Model, before: NodeState): number | null {
  const { kv, phases } = nodeAt(model, model.nodeIndex.get(project.node)!);
  const faultKva =
    phases === allPhases ? Math.sqrt(3) * kv * before.threePhase! : (kv / Math.sqrt(3)) * before.lineGround!;
  return over(faultKva, projectKva(project));
}

/** Judges the grounding at a node of a solved case, at the tap of a lateral; null where nothing feeds it. */
export function reportGrounding(solved: SolvedCase, node: number): Grounding | null {
  const point = findFaultPoint(solved, node);
  return point ? judgeGrounding(point.z1, point.z2, point.z0) : null;
}

/** Reports the grounding with every source out and every machine, bank and transformer in, the project's included. */
export function reportIslandGrounding(model: Model, node: number): Grounding | null {
  const island: CaseChoice = {
    sources: 'out',
    prefaultFactor: 1,
    machines: 'all',
    inverters: 'none',
    groundingBanks: 'all',
    project: true,
    companions: true,
  };
  return withCase(model, island, (solved) => reportGrounding(solved, node));
}
