import type { Study } from '../../shared/schemas/study.ts';
import { nodeAt } from './model-parts.ts';
import type { SolvedCase } from './solve-case.ts';
import type { StateName } from './states.ts';

/** Lists what a reader of the numbers must know, each once. */
export function listWarnings(study: Study, states: Record<StateName, SolvedCase>): string[] {
  const warnings = new Set<string>();
  for (const { id, max } of study.feeder.sources ?? []) {
    if (!max.z0) {
      warnings.add(
        `Source ${id} gives no zero-sequence impedance: it is taken as open, and ground faults need data.`,
      );
    }
  }
  for (const warning of listCaseWarnings(Object.values(states))) warnings.add(warning);
  return [...warnings];
}

/** Lists what is amiss in solved cases, each once. */
export function listCaseWarnings(cases: readonly SolvedCase[]): Set<string> {
  const warnings = new Set<string>();
  for (const { model, topology, networks, openCircuit } of cases) {
    for (const node of openCircuit.strandedInverters) {
      const { id } = nodeAt(model, node);
      warnings.add(`A one-phase inverter at ${id} has no way back for its current and is left out.`);
    }
    for (const [name, { weakBuses }] of Object.entries(networks)) {
      for (const bus of weakBuses) {
        const { id } = nodeAt(model, topology.busOf.indexOf(bus));
        warnings.add(
          `The ${name} sequence nearly resonates at ${id}: currents there are not to be relied on.`,
        );
      }
    }
  }
  return warnings;
}
