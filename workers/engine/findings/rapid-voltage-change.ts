import type { Complex } from '../complex.ts';
import { add, scale, subtract, sum } from '../complex.ts';
import type { FaultPoint } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import { phaseSet } from '../per-unit.ts';
import { projectKva } from '../project-size.ts';
import { findFaultPoint } from '../solve-case.ts';
import { Working } from '../working.ts';
import { listFedCases, notFedNote } from './fed-cases.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import { limitedTo, numberOf, sourceOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';
import { workChange, workInrush } from './voltage-change-working.ts';
import { describeWeakest } from './weakest-source.ts';

const id = 'rapid-voltage-change';

/** Impedance of the grid per unit, for power written on all three phases' base, and what it is. */
export type Grid = { operating: OperatingCase; z: Complex; of: string };

export type Power = { kw: number; kvar: number };

/**
 * Does a trip, a ramp or an energisation change the voltage too fast?
 * At nameplate against the weakest source without other generation: two nodes, exactly, and d = ΔS/Ssc·cos(ψ − φ) beside
 * it. One finding each for tripping, for a ramp and, where the project has a transformer, for energising it. The operating
 * case with the largest change decides.
 */
export function answerRapidVoltageChange(screening: Screening): Answered[] {
  const { project, model, poi } = screening;
  if (projectKva(project) === 0) {
    return [answer(screening, id, 'not-applicable', { note: 'The project has no generator.' })];
  }
  const fed = listFedCases(screening);
  if (fed.length === 0)
    return [answer(screening, id, 'needs-data', { element: project.node, note: notFedNote })];
  const grids = fed.map((operating) => findGrid(screening, operating));
  const missing = grids.find((grid): grid is string => typeof grid === 'string');
  if (missing !== undefined)
    return [answer(screening, id, 'needs-data', { element: project.node, note: missing })];
  const all = grids as Grid[];
  const isLow = nodeAt(model, poi).kv <= numberOf(screening, id, 'lowVoltageUpToKv');
  const limit = isLow
    ? numberOf(screening, id, 'lowVoltageLimitPercent')
    : ruleOf(screening, id).limits[0].limit!;
  const limited = (from: string, percent: number, consequence?: 'note') =>
    limitedTo(screening, id, {
      ...(consequence && { consequence }),
      limit: percent,
      comparison: ruleOf(screening, id).limits[0].comparison,
      unit: '%',
      source: sourceOf(screening, id, from),
    });
  const full = nameplateOf(screening);
  const share = numberOf(screening, id, 'rampShare');
  const change = (from: string, what: string, power: Power) =>
    judgeWorst(limited(from, limit), all, what, (grid, working) =>
      workChange(screening, grid, power, working),
    );
  const found = [
    change(isLow ? 'lowVoltageSource' : '', 'tripping', full),
    change('rampSource', `a ramp of ${share} of nameplate`, { kw: full.kw * share, kvar: full.kvar * share }),
  ];
  const transformerKva = (project.transformers ?? []).reduce((total, { kva }) => total + kva, 0);
  if (transformerKva > 0) {
    const energising = limited(
      'energisationSource',
      numberOf(screening, id, 'energisationLimitPercent'),
      'note',
    );
    found.push(
      judgeWorst(energising, all, 'energising its transformer', (grid, working) =>
        workInrush(screening, grid, transformerKva, working),
      ),
    );
  }
  return found;
}

/** All that the project can make, at the power factors it is set to. */
function nameplateOf({ project }: Screening): Power {
  const total = { kw: 0, kvar: 0 };
  for (const { kva, powerFactor = 1 } of [...(project.machines ?? []), ...(project.inverters ?? [])]) {
    total.kw += kva * Math.abs(powerFactor);
    total.kvar += (powerFactor < 0 ? -1 : 1) * kva * Math.sqrt(1 - powerFactor ** 2);
  }
  return total;
}

/**
 * On how many phases the project's generators are: three for machines. Units on one phase each of two phases are taken as all on
 * one, which is on the safe side.
 */
function countPhases({ project }: Screening): number {
  const { machines = [], inverters = [] } = project;
  if (machines.length > 0) return 3;
  const all = inverters.reduce((set, { phases }) => set | phaseSet(phases), 0);
  const count = [1, 2, 4].filter((bit) => all & bit).length;
  return count === 2 && inverters.some(({ phases }) => phases.length === 1) ? 1 : count;
}

function findGrid(screening: Screening, operating: OperatingCase): Grid | string {
  const { model, poi } = screening;
  const point = findFaultPoint(operating.solver.solve('minimum', nodeAt(model, poi).kv), poi);
  if (!point) return notFedNote;
  const found = impedanceFor(point, countPhases(screening));
  return found
    ? { operating, ...found }
    : 'A source gives no zero-sequence impedance, which the change on one phase needs.';
}

/** Z1; between two phases the loop through both; of one phase three times the loop to earth, as it has a third of the base. */
function impedanceFor(
  { z1, z2, z0, self, mutual }: FaultPoint,
  count: number,
): { z: Complex; of: string } | undefined {
  if (count === 3) return { z: z1, of: 'the grid' };
  if (count === 2)
    return { z: sum(z1, z2, scale(subtract(self, mutual), 2)), of: 'the loop through both phases' };
  if (!z0) return undefined;
  return { z: scale(add(scale(sum(z0, z1, z2), 1 / 3), self), 3), of: 'three times the loop to earth' };
}

function judgeWorst(
  screening: Screening,
  grids: readonly Grid[],
  what: string,
  work: (grid: Grid, working: Working) => { value: number; note: string } | undefined,
): Answered {
  const element = `${screening.project.node} (${what})`;
  let worst: { grid: Grid; value: number; note: string; working: Working } | undefined;
  for (const grid of grids) {
    const working = new Working();
    const found = work(grid, working);
    if (!found) {
      const note = [
        `At this strength of the grid there is no steady voltage with the project.`,
        ...describeWeakest(screening),
        ...describeDeciding(screening.cases, grid.operating),
      ].join(' ');
      return answer(screening, id, 'outside', { element, note });
    }
    if (!worst || found.value > worst.value * (1 + 1e-9)) worst = { grid, working, ...found };
  }
  const { value, note, grid, working } = worst!;
  return judge(screening, id, {
    element,
    value,
    working: working.steps,
    note: [note, ...describeWeakest(screening), ...describeDeciding(screening.cases, grid.operating)].join(
      ' ',
    ),
  });
}
