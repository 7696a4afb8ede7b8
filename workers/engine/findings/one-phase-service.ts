import type { ServiceTie, ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import type { Generator } from './island-generation.ts';
import { listGenerators } from './island-generation.ts';
import type { Screening } from './screening.ts';

/* How one-phase generators reach the primary. */

export type ServedGenerator = { generator: Generator; tie: ServiceTie; transformer: ServiceTransformer };

/** The project's one-phase generators by service transformer, and those of which none is told. */
export type OnePhaseServices = {
  readonly served: ReadonlyMap<ServiceTransformer, readonly ServedGenerator[]>;
  readonly untold: readonly Generator[];
};

export function serviceOf({ unit }: Generator): ServiceTie | undefined {
  return (unit.kind === 'machine' ? unit.machine : unit.inverter).service;
}

/** Finds them; what stands behind the project's own transformer uses nobody's secondary. */
export function findOnePhaseServices(screening: Screening): OnePhaseServices {
  const { study, project, model } = screening;
  const transformers = new Map((study.feeder.serviceTransformers ?? []).map((each) => [each.id, each]));
  const own = new Set((project.nodes ?? []).map(({ id }) => model.nodeIndex.get(id)!));
  const served = new Map<ServiceTransformer, ServedGenerator[]>();
  const untold: Generator[] = [];
  for (const generator of listGenerators(screening)) {
    const { unit, ofProject, node } = generator;
    // A machine is three-phase in any study.
    if (!ofProject || unit.kind === 'machine' || unit.inverter.phases.length === 3 || own.has(node)) continue;
    const tie = serviceOf(generator);
    const transformer = tie && transformers.get(tie.transformer);
    if (!tie || !transformer) untold.push(generator);
    else served.set(transformer, [...(served.get(transformer) ?? []), { generator, tie, transformer }]);
  }
  return { served, untold };
}
