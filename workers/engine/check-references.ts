import type { Study } from '../../shared/schemas/study.ts';
import { ElementList } from './element-list.ts';
import { IdIndex } from './id-index.ts';
import { checkScenarioReferences } from './scenario-references.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';
import type { ElementKind } from './study-elements.ts';

/* That every id is used once and every reference leads somewhere. */

const nodeKinds = ['sources', 'groundingBanks', 'machines', 'inverters', 'loads'] as const;
const branchKinds = ['lines', 'transformers', 'switches'] as const;

/** A list and the numbers of the nodes that its elements name; `joins` is 0 for a branch that joins nothing. */
export type AtNodes<K extends (typeof nodeKinds)[number] = (typeof nodeKinds)[number]> = {
  list: ElementList<K>;
  node: Int32Array;
};
export type BetweenNodes<K extends (typeof branchKinds)[number] = (typeof branchKinds)[number]> = {
  list: ElementList<K>;
  from: Int32Array;
  to: Int32Array;
  joins: Uint8Array;
};

/** What a study joins, with numbers in place of ids; -1 stands for what there is not. */
export type JoinedStudy = { nodes: ElementList<'nodes'> } & {
  [K in (typeof nodeKinds)[number]]: AtNodes<K>;
} & {
  [K in (typeof branchKinds)[number]]: BetweenNodes<K>;
};

/** Notes duplicate ids, references to nothing, and elements that join a node to itself. */
export function checkReferences(study: Study, problems: Problems): JoinedStudy {
  const nodes = new ElementList(study, 'nodes');
  const listOfKind = <K extends ElementKind>(kind: K) => new ElementList(study, kind);
  const at = <K extends (typeof nodeKinds)[number]>(kind: K): AtNodes<K> => {
    const list = listOfKind(kind);
    return { list, node: new Int32Array(list.elements.length) };
  };
  const between = <K extends (typeof branchKinds)[number]>(kind: K): BetweenNodes<K> => {
    const list = listOfKind(kind);
    const count = list.elements.length;
    const joins = new Uint8Array(count).fill(1);
    return { list, from: new Int32Array(count), to: new Int32Array(count), joins };
  };
  const joined: JoinedStudy = {
    nodes,
    sources: at('sources'),
    groundingBanks: at('groundingBanks'),
    machines: at('machines'),
    inverters: at('inverters'),
    loads: at('loads'),
    lines: between('lines'),
    transformers: between('transformers'),
    switches: between('switches'),
  };
  joined.switches.list.elements.forEach(({ closed }, index) => {
    if (!closed) joined.switches.joins[index] = 0;
  });
  const devices = listOfKind('devices');

  // Which kinds share one set of ids: what refers to them must not be in doubt.
  const index = (...lists: ElementList<ElementKind>[]) => new IdIndex(lists, problems);
  const nodeIds = { ids: index(nodes), what: 'node' };
  const branchIds = { ids: index(joined.lines.list, joined.transformers.list), what: 'line or transformer' };
  const generatorIds = {
    ids: index(joined.machines.list, joined.inverters.list),
    what: 'machine or inverter',
  };
  const deviceIds = { ids: index(devices), what: 'device' };
  for (const kind of ['sources', 'switches', 'groundingBanks', 'loads'] as const) index(joined[kind].list);

  for (const kind of nodeKinds) resolve(joined[kind].list, 'node', nodeIds, problems, joined[kind].node);
  for (const kind of branchKinds) {
    const { list, from, to } = joined[kind];
    resolve(list, 'from', nodeIds, problems, from);
    resolve(list, 'to', nodeIds, problems, to);
    checkEnds(joined[kind], problems);
  }
  const companions = [nodes, ...branchKinds.map((kind) => joined[kind].list)];
  for (const list of [...companions, joined.groundingBanks.list, joined.loads.list]) {
    resolve(list, 'with', generatorIds, problems);
  }
  resolve(joined.transformers.list, 'unitMachine', generatorIds, problems);
  resolve(devices, 'branch', branchIds, problems);
  checkFeederLists(study, deviceIds, problems);
  checkScenarioReferences(study, joined, problems);
  if (study.project) refer(study.project.node, nodeIds, '/project/node', problems);
  return joined;
}

type Namespace = { ids: IdIndex; what: string };

/** Follows one field of all elements of a list; an optional field may be missing. */
function resolve(
  list: ElementList<ElementKind>,
  field: string,
  target: Namespace,
  problems: Problems,
  numbers?: Int32Array,
): void {
  const { elements } = list;
  let guess = 0;
  for (let index = 0; index < elements.length; index++) {
    const id = (elements[index] as unknown as Record<string, string | undefined>)[field];
    if (id === undefined) continue;
    const number = target.ids.find(id, guess);
    guess = number + 1;
    if (numbers) numbers[index] = number;
    if (!isWithinReach(target, number, list.isOfProject(index))) {
      noteMissing(target, id, number, () => list.pointer(index, field), problems);
    }
  }
}

/** What belongs to the feeder is there without the project, so it cannot lean on the project's own elements. */
function isWithinReach({ ids }: Namespace, number: number, ofProject: boolean): boolean {
  return number !== -1 && (ofProject || !ids.isOfProject(number));
}

function noteMissing(
  { what }: Namespace,
  id: string,
  number: number,
  pointer: () => string,
  problems: Problems,
): void {
  const whose = number === -1 ? 'of this file' : 'of the feeder';
  problems.add(() => ({
    pointer: pointer(),
    got: describeValue(id),
    expected: `the id of a ${what} ${whose}`,
  }));
}

function refer(id: string, target: Namespace, pointer: string, problems: Problems): void {
  const number = target.ids.find(id, 0);
  if (!isWithinReach(target, number, false)) noteMissing(target, id, number, () => pointer, problems);
}

function checkEnds({ list, from, to }: BetweenNodes, problems: Problems): void {
  for (let index = 0; index < from.length; index++) {
    if (from[index] !== to[index] || from[index] === -1) continue;
    const got = describeValue(list.elements[index]!.to);
    problems.add(() => ({ pointer: list.pointer(index, 'to'), got, expected: 'another node than `from`' }));
  }
}

function checkFeederLists({ feeder }: Study, deviceIds: Namespace, problems: Problems): void {
  for (const kind of ['sections', 'circuits', 'scenarios'] as const) {
    const firstOf = new Map<string, number>();
    (feeder[kind] ?? []).forEach(({ id }, index) => {
      const first = firstOf.get(id);
      if (first === undefined) firstOf.set(id, index);
      else {
        const expected = `an id of its own (/feeder/${kind}/${first} has this one)`;
        problems.add(() => ({ pointer: `/feeder/${kind}/${index}/id`, got: describeValue(id), expected }));
      }
    });
  }
  (feeder.sections ?? []).forEach(({ device }, index) => {
    refer(device, deviceIds, `/feeder/sections/${index}/device`, problems);
  });
}
