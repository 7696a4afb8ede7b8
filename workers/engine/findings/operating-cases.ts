import type { Model } from '../case.ts';
import { nameOf } from '../scenarios.ts';
import type { OperatingCases, StateSolver } from '../state-solver.ts';
import type { Upstream } from './upstream.ts';
import { traceUpstream } from './upstream.ts';

/** One way to run the feeder: the model as it stands, or a scenario, which has a name. */
export type OperatingCase = {
  readonly name: string | undefined;
  readonly solver: StateSolver;
  /** The way from the sources to the point of interconnection, as it is then. */
  readonly upstream: Upstream;
};

/** Lists the model as it stands and all scenarios; `upstream` is the former's. */
export function listCases({
  operating: { base, scenarios },
  model,
  kv,
  poi,
  upstream,
}: {
  operating: OperatingCases;
  model: Model;
  kv: number;
  poi: number;
  upstream: Upstream;
}): OperatingCase[] {
  return [
    { name: undefined, solver: base, upstream },
    ...scenarios.map((solver) => ({
      name: nameOf(solver.scenario!),
      solver,
      upstream: traceUpstream(model, solver.solve('after', kv).choice, poi),
    })),
  ];
}

/** Says which of several cases decides; nothing where there is only one. */
export function describeDeciding(cases: readonly OperatingCase[], { name }: OperatingCase): string[] {
  if (cases.length === 1) return [];
  return name === undefined
    ? ['Of all operating cases the model as it stands decides.']
    : [`Of all operating cases ${JSON.stringify(name)} decides.`];
}
