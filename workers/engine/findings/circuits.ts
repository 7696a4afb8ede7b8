import type { Circuit } from '../../../shared/schemas/study-utility.ts';
import { branchAt } from '../model-parts.ts';
import type { Screening } from './screening.ts';
import type { Upstream } from './upstream.ts';

const known = new WeakMap<Upstream, { circuit: Circuit | undefined }>();

/** The circuit of the first branch towards the source that names one; else the model's only one. */
export function findCircuit(screening: Screening, upstream: Upstream): Circuit | undefined {
  let found = known.get(upstream);
  if (!found) known.set(upstream, (found = { circuit: lookUp(screening, upstream) }));
  return found.circuit;
}

function lookUp({ study, model }: Screening, upstream: Upstream): Circuit | undefined {
  const { lines = [], transformers = [], circuits = [] } = study.feeder;
  const ids = upstream.branches.map((branch) => branchAt(model, branch).id);
  const onPath = new Set(ids);
  const circuitOf = new Map<string, string | undefined>();
  for (const list of [lines, transformers]) {
    for (const { id, circuit } of list) if (onPath.has(id)) circuitOf.set(id, circuit);
  }
  const name = ids.map((id) => circuitOf.get(id)).find(Boolean);
  if (name) return circuits.find((circuit) => circuit.id === name);
  return circuits.length === 1 ? circuits[0] : undefined;
}
