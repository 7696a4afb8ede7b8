import type { Circuit } from '../../../shared/schemas/study-utility.ts';
import { branchAt } from '../model-parts.ts';
import type { Screening } from './screening.ts';
import type { Upstream } from './upstream.ts';

/** The circuit of the first branch towards the source that names one; else the model's only one. */
export function findCircuit({ study, model }: Screening, upstream: Upstream): Circuit | undefined {
  const { lines = [], transformers = [], circuits = [] } = study.feeder;
  const onPath = new Set(upstream.branches.map((branch) => branchAt(model, branch).id));
  const circuitOf = new Map<string, string | undefined>();
  for (const { id, circuit } of [...lines, ...transformers]) if (onPath.has(id)) circuitOf.set(id, circuit);
  const name = upstream.branches.map((branch) => circuitOf.get(branchAt(model, branch).id)).find(Boolean);
  if (name) return circuits.find((circuit) => circuit.id === name);
  return circuits.length === 1 ? circuits[0] : undefined;
}
