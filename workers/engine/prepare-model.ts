import type {
  GroundingBank,
  Line,
  Machine,
  Source,
  SourceStrength,
  Study,
} from '../../shared/schemas/study.ts';
import type { Belonging, Branch, Model, ModelSource, Shunt } from './case.ts';
import type { Complex } from './complex.ts';
import { add, scale, subtract } from './complex.ts';
import { inverterCurrents } from './inverter-currents.ts';
import { baseOhms, earthing, perUnit, phaseSet } from './per-unit.ts';
import type { ElementKind, Placed } from './study-elements.ts';
import { eachElement } from './study-elements.ts';
import { transformerBranch } from './transformer-branch.ts';

/** Turns a checked study into the model that every case is solved on. */
export function prepareModel(study: Study): Model {
  const { baseMva } = study;
  const nodes = mapElements(study, 'nodes', ({ id, kv, phases }, belonging) => {
    return { id, kv, phases: phaseSet(phases), ...belonging };
  });
  const nodeIndex = new Map(nodes.map((node, index) => [node.id, index]));
  const indexOf = (id: string) => nodeIndex.get(id)!;
  const ohmsAt = (id: string) => baseOhms(baseMva, nodes[indexOf(id)]!.kv);

  const branches: Branch[] = [
    ...mapElements(study, 'lines', (line, belonging) => {
      const ends = { from: indexOf(line.from), to: indexOf(line.to) };
      return { ...ends, ...lineBranch(line, ohmsAt(line.from)), ...belonging };
    }),
    ...mapElements(study, 'transformers', (transformer, belonging) => {
      const ends = { from: indexOf(transformer.from), to: indexOf(transformer.to) };
      const kvTo = nodes[ends.to]!.kv;
      return {
        ...ends,
        ...transformerBranch(transformer, baseMva, nodes[ends.from]!.kv, kvTo),
        ...belonging,
      };
    }),
  ];
  const shuntOf =
    <E extends { node: string }>(impedances: (element: E, ohms: number) => SequenceImpedances) =>
    (element: E, belonging: Belonging): Shunt => ({
      node: indexOf(element.node),
      ...impedances(element, ohmsAt(element.node)),
      ...belonging,
    });
  return {
    baseMva,
    nodes,
    nodeIndex,
    branches,
    branchIndex: new Map(branches.map((branch, index) => [branch.id, index])),
    switches: mapElements(study, 'switches', ({ from, to, closed }, belonging) => {
      return { from: indexOf(from), to: indexOf(to), closed, ...belonging };
    }),
    sources: mapElements(study, 'sources', (source, belonging): ModelSource => {
      const shunt = (strength: SourceStrength) =>
        shuntOf<Source>((_, ohms) => sourceImpedances(strength, ohms))(source, belonging);
      return { max: shunt(source.max), min: shunt(source.min ?? source.max) };
    }),
    machines: mapElements(
      study,
      'machines',
      shuntOf((machine: Machine, ohms) => machineImpedances(machine, baseMva, ohms)),
    ),
    groundingBanks: mapElements(
      study,
      'groundingBanks',
      shuntOf(({ z0 }: GroundingBank, ohms) => ({ z1: null, z2: null, z0: perUnit(z0, ohms) })),
    ),
    inverters: mapElements(study, 'inverters', (inverter, belonging) => ({
      node: indexOf(inverter.node),
      phases: phaseSet(inverter.phases),
      currents: inverterCurrents(inverter, baseMva),
      ...belonging,
    })),
  };
}

type SequenceImpedances = Pick<Shunt, 'z1' | 'z2' | 'z0'>;

function mapElements<K extends ElementKind, R>(
  study: Study,
  kind: K,
  make: (element: Placed<K>['element'], belonging: Belonging) => R,
): R[] {
  return Array.from(eachElement(study, kind), ({ element, ofProject }) =>
    make(element, { ofProject, companion: 'with' in element && element.with !== undefined }),
  );
}

function lineBranch(line: Line, ohms: number): Omit<Branch, 'from' | 'to' | keyof Belonging> {
  const z1 = scale(perUnit(line.z1, ohms), line.km);
  const z0 = scale(perUnit(line.z0, ohms), line.km);
  return {
    id: line.id,
    phases: phaseSet(line.phases),
    z1,
    zeroSequence: { kind: 'series', z: z0 },
    self: scale(add(z0, scale(z1, 2)), 1 / 3),
    mutual: scale(subtract(z0, z1), 1 / 3),
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
