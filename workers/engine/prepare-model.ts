import type { Machine, SourceStrength, Study } from '../../shared/schemas/study.ts';
import type { Branch, CurrentSource, Model, ModelNode, ModelSource, ModelSwitch, Shunt } from './case.ts';
import { allPhases } from './case.ts';
import type { JoinedStudy } from './check-references.ts';
import { joinedStudyOf } from './check-references.ts';
import type { Complex } from './complex.ts';
import { add, scale, zero } from './complex.ts';
import type { ElementList, ElementOf } from './element-list.ts';
import { inverterCurrents } from './inverter-currents.ts';
import { layOutWiring } from './lay-out-wiring.ts';
import { makePartsBy } from './model-parts.ts';
import { baseOhms, earthing, perUnit, phaseSet } from './per-unit.ts';
import type { ElementKind } from './study-elements.ts';
import { transformerBranch } from './transformer-branch.ts';
import type { Wiring } from './wiring.ts';
import { rememberWiring } from './wiring.ts';

/** Turns a checked study into the model that every case is solved on. */
export function prepareModel(study: Study): Model {
  const { baseMva } = study;
  const joined = joinedStudyOf(study);
  const { nodes, lines, nodeIds, branchIds } = joined;
  const kvOf = (node: number) => nodes.elements[node]!.kv;
  const ohmsOf = (node: number) => baseOhms(baseMva, kvOf(node));
  const transformers = prepareTransformers(joined, baseMva, kvOf);
  const wiring = layOutWiring(study, joined, transformers);
  const lineCount = lines.list.elements.length;

  const nodeAt = (index: number): ModelNode => {
    const { id, kv, phases, with: generator } = nodes.elements[index]!;
    const ofProject = nodes.isOfProject(index);
    return { id, ofProject, companion: generator !== undefined, kv, phases: phaseSet(phases) };
  };
  const lineBranches = new Array<Branch | undefined>(lineCount);
  const branchAt = (index: number): Branch =>
    index < lineCount
      ? (lineBranches[index] ??= lineBranch(lines.list, wiring, index))
      : transformers[index - lineCount]!;
  let allNodes: ModelNode[] | undefined;
  let allBranches: Branch[] | undefined;

  const model: Model = {
    baseMva,
    get nodes() {
      return (allNodes ??= nodes.elements.map((_, index) => nodeAt(index)));
    },
    nodeIndex: nodeIds,
    get branches() {
      return (allBranches ??= Array.from(wiring.from, (_, index) => branchAt(index)));
    },
    branchIndex: branchIds,
    switches: prepareEach(
      joined.switches.list,
      ({ id, closed }, index, ofProject, companion): ModelSwitch => {
        const { from, to } = joined.switches;
        return { id, ofProject, companion, from: from[index]!, to: to[index]!, closed };
      },
    ),
    sources: prepareEach(
      joined.sources.list,
      ({ id, max, min }, index, ofProject, companion): ModelSource => {
        const node = joined.sources.node[index]!;
        const shunt = (strength: SourceStrength): Shunt => {
          return { id, ofProject, companion, node, ...sourceImpedances(strength, ohmsOf(node)) };
        };
        return { max: shunt(max), min: shunt(min ?? max) };
      },
    ),
    machines: prepareEach(joined.machines.list, (machine, index, ofProject, companion): Shunt => {
      const node = joined.machines.node[index]!;
      const { z1, z2, z0 } = machineImpedances(machine, baseMva, ohmsOf(node));
      return { id: machine.id, ofProject, companion, node, z1, z2, z0 };
    }),
    groundingBanks: prepareEach(
      joined.groundingBanks.list,
      ({ id, z0 }, index, ofProject, companion): Shunt => {
        const node = joined.groundingBanks.node[index]!;
        return { id, ofProject, companion, node, z1: null, z2: null, z0: perUnit(z0, ohmsOf(node)) };
      },
    ),
    inverters: prepareEach(joined.inverters.list, (inverter, index, ofProject, companion): CurrentSource => {
      const node = joined.inverters.node[index]!;
      const phases = phaseSet(inverter.phases);
      const currents = inverterCurrents(inverter, baseMva);
      return { id: inverter.id, ofProject, companion, node, phases, currents };
    }),
  };
  rememberWiring(model, wiring);
  makePartsBy(model, { nodeAt, branchAt });
  return model;
}

/**
 * Goes through the elements of a list. Each is written out field by field: put together from parts it would take ten times
 * as long to make.
 */
function prepareEach<K extends ElementKind, R>(
  list: ElementList<K>,
  prepare: (element: ElementOf<K>, index: number, ofProject: boolean, companion: boolean) => R,
): R[] {
  return list.elements.map((element, index) => {
    const { with: generator } = element as { with?: string };
    return prepare(element, index, list.isOfProject(index), generator !== undefined);
  });
}

function prepareTransformers(
  { transformers }: JoinedStudy,
  baseMva: number,
  kvOf: (node: number) => number,
): Branch[] {
  return prepareEach(transformers.list, (transformer, index, ofProject, companion): Branch => {
    const from = transformers.from[index]!;
    const to = transformers.to[index]!;
    const electrical = transformerBranch(transformer, baseMva, kvOf(from), kvOf(to));
    return { id: transformer.id, ofProject, companion, from, to, ...electrical };
  });
}

function lineBranch(list: ElementList<'lines'>, wiring: Wiring, index: number): Branch {
  const { id, phases: letters, with: generator } = list.elements[index]!;
  const { z1Re, z1Im, z0Re, z0Im, selfRe, selfIm, mutualRe, mutualIm } = wiring;
  const phases = phaseSet(letters);
  const isLateral = phases !== allPhases;
  return {
    id,
    ofProject: list.isOfProject(index),
    companion: generator !== undefined,
    from: wiring.from[index]!,
    to: wiring.to[index]!,
    phases,
    z1: { re: z1Re[index]!, im: z1Im[index]! },
    zeroSequence: { kind: 'series', z: { re: z0Re[index]!, im: z0Im[index]! } },
    self: isLateral ? { re: selfRe[index]!, im: selfIm[index]! } : zero,
    mutual: isLateral ? { re: mutualRe[index]!, im: mutualIm[index]! } : zero,
    clockHour: 0,
  };
}

function sourceImpedances({ z1, z2, z0 }: SourceStrength, ohms: number): Pick<Shunt, 'z1' | 'z2' | 'z0'> {
  return { z1: perUnit(z1, ohms), z2: perUnit(z2 ?? z1, ohms), z0: z0 ? perUnit(z0, ohms) : null };
}

/** r + jXd'', r + jX2 and, where the neutral is grounded, r + jX0 + 3·Zn; the first three are on the machine's own kVA. */
function machineImpedances(machine: Machine, baseMva: number, ohms: number): Pick<Shunt, 'z1' | 'z2' | 'z0'> {
  const onBase = (reactancePu: number): Complex =>
    scale({ re: machine.rPu ?? 0, im: reactancePu }, (baseMva * 1000) / machine.kva);
  const earth = machine.kind === 'induction' ? null : earthing(machine.neutral, ohms);
  return {
    z1: onBase(machine.xSubtransientPu),
    z2: onBase(machine.x2Pu ?? machine.xSubtransientPu),
    z0: earth ? add(onBase(machine.x0Pu ?? 0), earth) : null,
  };
}
