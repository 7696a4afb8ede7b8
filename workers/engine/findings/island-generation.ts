import type { Inverter, Machine } from '../../../shared/schemas/study.ts';
import type { Island } from './islands.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/* The generators of the model and of the project, and which of them an island has. */

export type Generator = {
  readonly id: string;
  readonly kva: number;
  /** Index of its node. */
  readonly node: number;
  readonly ofProject: boolean;
  readonly unit: { kind: 'machine'; machine: Machine } | { kind: 'inverter'; inverter: Inverter };
};

const known = new WeakMap<Screening, readonly Generator[]>();

/** Lists all generators, the feeder's before the project's, at nameplate. */
export function listGenerators(screening: Screening): readonly Generator[] {
  let generators = known.get(screening);
  if (!generators) known.set(screening, (generators = gather(screening)));
  return generators;
}

function gather({ study, project, model }: Screening): Generator[] {
  return [study.feeder, project].flatMap((lists) => {
    const { machines = [], inverters = [] } = lists;
    const ofProject = lists === project;
    const place = ({ id, kva, node }: Machine | Inverter) => {
      return { id, kva, node: model.nodeIndex.get(node)!, ofProject };
    };
    return [
      ...machines.map((machine) => ({ ...place(machine), unit: { kind: 'machine', machine } as const })),
      ...inverters.map((inverter) => ({ ...place(inverter), unit: { kind: 'inverter', inverter } as const })),
    ];
  });
}

const knownIn = new WeakMap<Island, readonly Generator[]>();

/** Lists what generates in an island; all questions about it share one walk over the generators. */
export function generatorsIn(
  screening: Screening,
  { solver }: OperatingCase,
  island: Island,
): readonly Generator[] {
  let generators = knownIn.get(island);
  if (!generators) {
    const out = new Set(solver.scenario?.out);
    generators = listGenerators(screening).filter(({ id, node }) => island.holds(node) && !out.has(id));
    knownIn.set(island, generators);
  }
  return generators;
}

export function sumKva(generators: readonly Generator[]): number {
  return generators.reduce((total, { kva }) => total + kva, 0);
}

/** Whether a generator can hold voltage by itself: a machine, or an inverter that forms a grid. */
export function holdsVoltage({ unit }: Generator): boolean {
  return unit.kind === 'machine' || unit.inverter.gridForming !== undefined;
}
