import type { ModelNode } from '../../db/repositories/model-nodes.ts';
import type { Feeder } from '../../shared/schemas/study.ts';

interface Step {
  to: string;
  km: number;
  /** Undefined where a switch hands on the circuit of its other side; null behind a transformer. */
  circuit: string | null | undefined;
}

function listSteps(feeder: Feeder): Map<string, Step[]> {
  const steps = new Map<string, Step[]>();
  const join = (from: string, to: string, km: number, circuit: string | null | undefined) => {
    steps.set(from, [...(steps.get(from) ?? []), { to, km, circuit }]);
    steps.set(to, [...(steps.get(to) ?? []), { to: from, km, circuit }]);
  };
  for (const line of feeder.lines ?? []) join(line.from, line.to, line.km, line.circuit ?? null);
  for (const transformer of feeder.transformers ?? []) join(transformer.from, transformer.to, 0, null);
  for (const gate of feeder.switches ?? []) if (gate.closed) join(gate.from, gate.to, 0, undefined);
  return steps;
}

/** Nodes with the circuit that reaches them first and their distance along the lines from the nearest source, in km. */
export function walkFeeder(feeder: Feeder): ModelNode[] {
  const steps = listSteps(feeder);
  const reached = new Map<string, { km: number; circuit: string | null }>();
  const queue = (feeder.sources ?? []).map((source) => ({
    id: source.node,
    km: 0,
    circuit: null as string | null,
  }));
  for (let next = queue.shift(); next; next = queue.shift()) {
    if (reached.has(next.id)) continue;
    reached.set(next.id, { km: next.km, circuit: next.circuit });
    for (const step of steps.get(next.id) ?? []) {
      if (!reached.has(step.to))
        queue.push({
          id: step.to,
          km: next.km + step.km,
          circuit: step.circuit === undefined ? next.circuit : step.circuit,
        });
    }
  }
  return feeder.nodes.flatMap(({ id, kv, phases, position }) => {
    if (position === undefined) return [];
    const [lng, lat] = position;
    const { km = null, circuit = null } = reached.get(id) ?? {};
    return [{ nodeId: id, kv, phases, circuit, distanceKm: km, lng, lat }];
  });
}
