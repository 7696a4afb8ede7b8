import type { Inverter, Machine, Project } from '../../../shared/schemas/study.ts';
import { listFedCases } from '../findings/fed-cases.ts';
import type { Screening } from '../findings/screening.ts';
import { outputOf } from './injections.ts';
import type { Flow } from './solve-flow.ts';
import { solveFlow, voltageAt } from './solve-flow.ts';
import { flowLoads, prepareVoltages } from './voltage-cases.ts';

/* What brings the rise at the point of interconnection within a limit: vars taken from the grid, or less power sent. */

/** Further from unity few inverters go. Common practice, no source. */
const leastPowerFactor = 0.85;

/**
 * The rise, in percent of nominal, with the project set otherwise, before controls move; the worst of all operating cases. The
 * networks and the flows without the project are worked out once. Undefined where a load flow has no answer.
 */
function makeRiseTrial(screening: Screening): ((project: Project) => number | undefined) | undefined {
  const { study, poi } = screening;
  const starts: {
    prepared: ReturnType<typeof prepareVoltages>['after'];
    before: Flow;
    load: (typeof flowLoads)[number];
  }[] = [];
  for (const operating of listFedCases(screening)) {
    const { before, after } = prepareVoltages(study, screening, operating);
    for (const load of flowLoads) {
      const idle = solveFlow(before, { load, withGeneration: false, controls: 'settle' });
      if ('failure' in idle) return undefined;
      const flow = solveFlow(before, { load, withGeneration: true, controls: 'settle', start: idle.state });
      if ('failure' in flow) return undefined;
      starts.push({ prepared: after, before: flow, load });
    }
  }
  return (project) => {
    let worst = -Infinity;
    for (const { prepared, before, load } of starts) {
      const changed = { ...prepared, study: { ...study, project } };
      const start = before.state;
      const flow = solveFlow(changed, { load, withGeneration: true, controls: 'held', start });
      if ('failure' in flow) return undefined;
      for (let phase = 0; phase < 3; phase++) {
        const [low, high] = [voltageAt(before, poi, phase), voltageAt(flow, poi, phase)];
        if (low !== null && high !== null) worst = Math.max(worst, (high - low) * 100);
      }
    }
    return worst === -Infinity ? undefined : worst;
  };
}

function withGenerators(
  project: Project,
  change: <G extends Machine | Inverter>(generator: G) => G,
): Project {
  return {
    ...project,
    ...(project.machines && { machines: project.machines.map(change) }),
    ...(project.inverters && { inverters: project.inverters.map(change) }),
  };
}

/**
 * The power factor nearest to unity, in hundredths and negative since it takes vars, at which the rise is within the limit;
 * 1 where it is without any, undefined where 0.85 is not enough.
 */
export function findPowerFactorForRise(screening: Screening, limitPercent: number): number | undefined {
  const riseOf = makeRiseTrial(screening);
  if (!riseOf) return undefined;
  const keeps = (powerFactor: number) => {
    const rise = riseOf(withGenerators(screening.project, (generator) => ({ ...generator, powerFactor })));
    return rise !== undefined && rise <= limitPercent;
  };
  if (keeps(1)) return 1;
  // Each hundredth further takes more vars: the first that is enough, by halving.
  let [low, high] = [1, Math.round((1 - leastPowerFactor) * 100)];
  if (!keeps(-leastPowerFactor)) return undefined;
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if (keeps(-(100 - middle) / 100)) high = middle;
    else low = middle + 1;
  }
  return -(100 - high) / 100;
}

/** The most kW of export, shared among its generators as now, at which the rise is within the limit; undefined where none is. */
export function findExportForRise(screening: Screening, limitPercent: number): number | undefined {
  const riseOf = makeRiseTrial(screening);
  if (!riseOf) return undefined;
  const { project } = screening;
  const generators = [...(project.machines ?? []), ...(project.inverters ?? [])];
  const total = generators.reduce((sum, generator) => sum + outputOf(generator).kw, 0);
  const keeps = (kw: number) => {
    const limited = withGenerators(project, (generator) => ({
      ...generator,
      exportKw: (outputOf(generator).kw * kw) / total,
    }));
    const rise = riseOf(limited);
    return rise !== undefined && rise <= limitPercent;
  };
  if (total === 0 || !keeps(0)) return undefined;
  let [low, high] = [0, Math.floor(total)];
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if (keeps(middle)) low = middle;
    else high = middle - 1;
  }
  return low;
}
