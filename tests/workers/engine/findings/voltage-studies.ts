import type { Study } from '../../../../shared/schemas/study.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { checkedStudy } from '../cases.ts';

/*
 * A feeder for voltage, flow and service: grid — bank — bus — l1 — mid — l2 — poi, 12.47 kV, with 1.2 + j2.4 ohms from bus to
 * poi, the source and the bank so strong that they hardly count, and the project's 2 MW of inverters at poi.
 */
export function voltageStudy(change: (study: ProjectStudy) => void = () => undefined): ProjectStudy {
  const line = { phases: 'ABC', km: 1, z1: { r: 0.6, x: 1.2 }, z0: { r: 1.5, x: 3.6 }, ampacityA: 200 };
  const strong = { z1: { r: 0, x: 1e-6 }, z0: { r: 0, x: 1e-6 } };
  const study: Study = {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    feeder: {
      nodes: [
        { id: 'grid', kv: 115, phases: 'ABC' },
        ...['bus', 'mid', 'poi'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
      ],
      sources: [{ id: 'utility', node: 'grid', max: strong }],
      transformers: [
        {
          id: 'bank',
          from: 'grid',
          to: 'bus',
          kva: 10_000,
          connection: 'Dyn1',
          impedancePercent: 1e-6,
          xr: 10,
        },
      ],
      lines: [
        { ...line, id: 'l1', from: 'bus', to: 'mid' },
        { ...line, id: 'l2', from: 'mid', to: 'poi' },
      ],
      loads: [{ id: 'town', node: 'mid', phases: 'ABC', kw: 1000, kvar: 300, minimumKw: 300 }],
    },
    project: {
      id: 'project',
      node: 'poi',
      inverters: [{ id: 'plant', node: 'poi', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2 }],
    },
  };
  const made = study as ProjectStudy;
  change(made);
  return checkedStudy(made) as ProjectStudy;
}

/** Puts the project on one or two phases of a lateral beyond poi, 1 ohm each way. */
export function moveToLateral({ feeder, project }: ProjectStudy, phases: string): void {
  feeder.nodes.push({ id: 'tap', kv: 12.47, phases });
  feeder.lines!.push({ ...feeder.lines![1]!, id: 'l3', from: 'poi', to: 'tap', phases });
  Object.assign(project, { node: 'tap' });
  project.inverters = [{ ...project.inverters![0]!, node: 'tap', phases, kva: 200 }];
}
