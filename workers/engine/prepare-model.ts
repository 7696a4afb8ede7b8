import type {
  ElementLists,
  Line,
  Machine,
  Project,
  SourceStrength,
  Study,
} from '../../shared/schemas/study.ts';
import type { Branch, CurrentSource, Model, ModelNode, ModelSource, ModelSwitch, Shunt } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { add, scale, subtract, zero } from './complex.ts';
import { inverterCurrents } from './inverter-currents.ts';
import type { LineImpedances } from './line-impedances.ts';
import { lineImpedances } from './line-impedances.ts';
import { baseOhms, earthing, perUnit, phaseSet } from './per-unit.ts';
import type { ElementKind, Placed } from './study-elements.ts';
import { transformerBranch } from './transformer-branch.ts';

/** Turns a checked study into the model that every case is solved on. */
export function prepareModel(study: Study): Model {
  const { baseMva } = study;
  const nodes = mapElements(study, 'nodes', ({ id, kv, phases }, ofProject, companion): ModelNode => {
    return { id, ofProject, companion, kv, phases: phaseSet(phases) };
  });
  const nodeIndex = indexById(nodes);
  // Files mostly list what joins nodes in the order of the nodes; each look-up saved is several trips to memory.
  let last = 0;
  const indexOf = (id: string): number => {
    if (nodes[last]!.id === id) return last;
    if (nodes[last + 1]?.id === id) return ++last;
    const index = nodeIndex.get(id)!;
    if (index > last) last = index;
    return index;
  };
  const ohmsOf = (node: number) => baseOhms(baseMva, nodes[node]!.kv);
  const impedancesOf = lineImpedances(study);

  const branches = mapElements(study, 'lines', (line, ofProject, companion): Branch => {
    const from = indexOf(line.from);
    return lineBranch(line, from, indexOf(line.to), impedancesOf(line), ohmsOf(from), ofProject, companion);
  });
  const transformers = mapElements(study, 'transformers', (transformer, ofProject, companion): Branch => {
    const from = indexOf(transformer.from);
    const to = indexOf(transformer.to);
    const electrical = transformerBranch(transformer, baseMva, nodes[from]!.kv, nodes[to]!.kv);
    return { id: transformer.id, ofProject, companion, from, to, ...electrical };
  });
  for (const transformer of transformers) branches.push(transformer);

  return {
    baseMva,
    nodes,
    nodeIndex,
    branches,
    branchIndex: indexById(branches),
    switches: mapElements(
      study,
      'switches',
      ({ id, from, to, closed }, ofProject, companion): ModelSwitch => {
        return { id, ofProject, companion, from: indexOf(from), to: indexOf(to), closed };
      },
    ),
    sources: mapElements(
      study,
      'sources',
      ({ id, node: at, max, min }, ofProject, companion): ModelSource => {
        const node = indexOf(at);
        const shunt = (strength: SourceStrength): Shunt => {
          return { id, ofProject, companion, node, ...sourceImpedances(strength, ohmsOf(node)) };
        };
        return { max: shunt(max), min: shunt(min ?? max) };
      },
    ),
    machines: mapElements(study, 'machines', (machine, ofProject, companion): Shunt => {
      const node = indexOf(machine.node);
      const { z1, z2, z0 } = machineImpedances(machine, baseMva, ohmsOf(node));
      return { id: machine.id, ofProject, companion, node, z1, z2, z0 };
    }),
    groundingBanks: mapElements(
      study,
      'groundingBanks',
      ({ id, node: at, z0 }, ofProject, companion): Shunt => {
        const node = indexOf(at);
        return { id, ofProject, companion, node, z1: null, z2: null, z0: perUnit(z0, ohmsOf(node)) };
      },
    ),
    inverters: mapElements(study, 'inverters', (inverter, ofProject, companion): CurrentSource => {
      const phases = phaseSet(inverter.phases);
      const currents = inverterCurrents(inverter, baseMva);
      return { id: inverter.id, ofProject, companion, node: indexOf(inverter.node), phases, currents };
    }),
  };
}

type SequenceImpedances = Pick<Shunt, 'z1' | 'z2' | 'z0'>;

/** Goes through all elements of a kind, the feeder's before the project's. */
function mapElements<K extends ElementKind, R>(
  study: Study,
  kind: K,
  make: (element: Placed<K>['element'], ofProject: boolean, companion: boolean) => R,
): R[] {
  const made: R[] = [];
  for (const part of ['feeder', 'project'] as const) {
    const lists: Pick<Project, 'nodes' | keyof ElementLists> | undefined = study[part];
    for (const element of (lists?.[kind] ?? []) as Placed<K>['element'][]) {
      made.push(make(element, part === 'project', 'with' in element && element.with !== undefined));
    }
  }
  return made;
}

function indexById(elements: readonly { id: string }[]): Map<string, number> {
  const index = new Map<string, number>();
  for (let at = 0; at < elements.length; at++) index.set(elements[at]!.id, at);
  return index;
}

function lineBranch(
  line: Line,
  from: number,
  to: number,
  perKm: LineImpedances,
  ohms: number,
  ofProject: boolean,
  companion: boolean,
): Branch {
  const perOhm = line.km / ohms;
  const z1 = { re: perKm.z1.r * perOhm, im: perKm.z1.x * perOhm };
  const z0 = { re: perKm.z0.r * perOhm, im: perKm.z0.x * perOhm };
  const phases = phaseSet(line.phases);
  const isLateral = phases !== allPhases;
  return {
    id: line.id,
    ofProject,
    companion,
    from,
    to,
    phases,
    z1,
    zeroSequence: { kind: 'series', z: z0 },
    self: isLateral ? scale(add(z0, scale(z1, 2)), 1 / 3) : zero,
    mutual: isLateral ? scale(subtract(z0, z1), 1 / 3) : zero,
    clockHour: 0,
  };
}

function sourceImpedances({ z1, z2, z0 }: SourceStrength, ohms: number): SequenceImpedances {
  return { z1: perUnit(z1, ohms), z2: perUnit(z2 ?? z1, ohms), z0: z0 ? perUnit(z0, ohms) : null };
}

/** r + jXd'', r + jX2 and, where the neutral is grounded, r + jX0 + 3·Zn; the first three are on the machine's own kVA. */
function machineImpedances(machine: Machine, baseMva: number, ohms: number): SequenceImpedances {
  const onBase = (reactancePu: number): Complex =>
    scale({ re: machine.rPu ?? 0, im: reactancePu }, (baseMva * 1000) / machine.kva);
  const earth = machine.kind === 'induction' ? null : earthing(machine.neutral, ohms);
  return {
    z1: onBase(machine.xSubtransientPu),
    z2: onBase(machine.x2Pu ?? machine.xSubtransientPu),
    z0: earth ? add(onBase(machine.x0Pu ?? 0), earth) : null,
  };
}
