import type { Study } from '../../shared/schemas/study.ts';
import type { JoinedStudy } from './check-references.ts';
import { lettersOf } from './phase-letters.ts';
import type { Namespace } from './namespaces.ts';
import { refer } from './namespaces.ts';
import { phaseSet } from './per-unit.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';

/* What the lists that a feeder alone has say of its elements, and what generators say of its service transformers. */

/** The sets of ids that such lists refer to. */
export type FeederNames = {
  nodes: Namespace;
  branches: Namespace;
  generators: Namespace;
  devices: Namespace;
};

const kinds = [
  'sections',
  'circuits',
  'scenarios',
  'substations',
  'serviceTransformers',
  'secondaryNetworks',
  'regulators',
] as const;

/** Notes ids that a list has twice, references to nothing, and phases that a place lacks. */
export function checkFeederLists(
  study: Study,
  names: FeederNames,
  joined: JoinedStudy,
  problems: Problems,
): void {
  for (const kind of kinds) checkOwnIds(study, kind, problems);
  checkSections(study, names, problems);
  checkPlaces(study, names, joined, problems);
  checkServiceTies(study, joined, problems);
}

function checkOwnIds({ feeder }: Study, kind: (typeof kinds)[number], problems: Problems): void {
  const firstOf = new Map<string, number>();
  (feeder[kind] ?? []).forEach(({ id }, index) => {
    const first = firstOf.get(id);
    if (first === undefined) return firstOf.set(id, index);
    const expected = `an id of its own (/feeder/${kind}/${first} has this one)`;
    problems.add(() => ({ pointer: `/feeder/${kind}/${index}/id`, got: describeValue(id), expected }));
  });
}

function checkSections({ feeder }: Study, { devices, generators }: FeederNames, problems: Problems): void {
  (feeder.sections ?? []).forEach(({ device, netOf = [] }, index) => {
    refer(device, devices, () => `/feeder/sections/${index}/device`, problems);
    netOf.forEach((id, place) => {
      refer(id, generators, () => `/feeder/sections/${index}/netOf/${place}`, problems);
    });
  });
}

function checkPlaces(
  { feeder }: Study,
  { nodes, branches }: FeederNames,
  joined: JoinedStudy,
  problems: Problems,
): void {
  const lineCount = joined.lines.list.elements.length;
  const lines = { ...branches, what: 'line', before: lineCount };
  const transformers = { ...branches, what: 'transformer', from: lineCount };
  (feeder.substations ?? []).forEach(({ transformer }, index) => {
    if (transformer !== undefined) {
      refer(transformer, transformers, () => `/feeder/substations/${index}/transformer`, problems);
    }
  });
  (feeder.serviceTransformers ?? []).forEach(({ node, phases }, index) => {
    const pointer = `/feeder/serviceTransformers/${index}/node`;
    const there = joined.nodes.elements[refer(node, nodes, pointer, problems)];
    if (there && phases) checkPhases(phases, there, 'a node', pointer, problems);
  });
  (feeder.secondaryNetworks ?? []).forEach((network, index) => {
    network.nodes.forEach((node, place) => {
      refer(node, nodes, () => `/feeder/secondaryNetworks/${index}/nodes/${place}`, problems);
    });
  });
  (feeder.regulators ?? []).forEach(({ branch, phases }, index) => {
    const pointer = `/feeder/regulators/${index}/branch`;
    const there = joined.lines.list.elements[refer(branch, lines, pointer, problems)];
    if (there) checkPhases(phases, there, 'a line', pointer, problems);
  });
}

function checkPhases(
  phases: string,
  there: { id: string; phases: string },
  what: string,
  pointer: string,
  problems: Problems,
): void {
  if (!(phaseSet(phases) & ~phaseSet(there.phases))) return;
  problems.add(() => ({
    pointer,
    got: `${describeValue(there.id)} with ${lettersOf(phaseSet(there.phases))}`,
    expected: `${what} with phases ${lettersOf(phaseSet(phases))}`,
  }));
}

function checkServiceTies({ feeder }: Study, joined: JoinedStudy, problems: Problems): void {
  let known: Set<string> | undefined;
  for (const { list } of [joined.machines, joined.inverters]) {
    for (let index = 0; index < list.elements.length; index++) {
      const { service } = list.elements[index]!;
      if (!service) continue;
      known ??= new Set((feeder.serviceTransformers ?? []).map(({ id }) => id));
      if (known.has(service.transformer)) continue;
      problems.add(() => ({
        pointer: list.pointer(index, 'service/transformer'),
        got: describeValue(service.transformer),
        expected: 'the id of a service transformer of the feeder',
      }));
    }
  }
}
