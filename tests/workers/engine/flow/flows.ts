import type { Study } from '../../../../shared/schemas/study.ts';
import type { Flow, FlowFailure, FlowOptions } from '../../../../workers/engine/flow/solve-flow.ts';
import { prepareFlow, solveFlow } from '../../../../workers/engine/flow/solve-flow.ts';
import { prepareModel } from '../../../../workers/engine/prepare-model.ts';
import { choiceOfState } from '../../../../workers/engine/states.ts';

/** Solves a study as it stands, at peak load with all generation unless told otherwise. */
export function tryFlow(study: Study, options: Partial<FlowOptions> = {}): Flow | FlowFailure {
  const prepared = prepareFlow(study, prepareModel(study), choiceOfState('after', study));
  return solveFlow(prepared, { load: 'peak', withGeneration: true, controls: 'settle', ...options });
}

export function flowOf(study: Study, options: Partial<FlowOptions> = {}): Flow {
  const flow = tryFlow(study, options);
  if ('failure' in flow) throw new Error(flow.failure);
  return flow;
}

/** A line of so many ohms between a source and a place without load. */
export function twoNodes(kv: number, { r, x }: { r: number; x: number }): Study {
  return {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    feeder: {
      nodes: ['near', 'far'].map((id) => ({ id, kv, phases: 'ABC' })),
      lines: [
        { id: 'l', from: 'near', to: 'far', phases: 'ABC', km: 1, z1: { r, x }, z0: { r: 2 * r, x: 3 * x } },
      ],
      sources: [{ id: 's', node: 'near', max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 1 } } }],
    },
  };
}

/** Ten kilometres of line in so many pieces, each with its share of two megawatts on one phase. */
export function chain(count: number): Study {
  const study = twoNodes(12.47, { r: 0.2, x: 0.4 });
  const names = Array.from({ length: count }, (_, k) => `n${k}`);
  study.feeder.nodes = names.map((id) => ({ id, kv: 12.47, phases: 'ABC' }));
  study.feeder.sources![0]!.node = 'n0';
  const [line] = study.feeder.lines!;
  study.feeder.lines = names
    .slice(1)
    .map((to, k) => ({ ...line!, id: `l${k}`, from: names[k]!, to, km: 10 / count }));
  study.feeder.loads = names.map((node, k) => ({
    id: `d${k}`,
    node,
    phases: 'ABC'[k % 3]!,
    kw: 2000 / count,
    kvar: 300 / count,
  }));
  return study;
}
