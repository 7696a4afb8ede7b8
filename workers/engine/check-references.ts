import type { Study } from '../../shared/schemas/study.ts';
import { checkFeederLists } from './check-feeder-lists.ts';
import { ElementList } from './element-list.ts';
import { IdIndex } from './id-index.ts';
import { refer, resolve } from './namespaces.ts';
import { checkScenarioReferences } from './scenario-references.ts';
import { Problems, describeValue } from './problems.ts';
import type { ElementKind } from './study-elements.ts';

/* That every id is used once and every reference leads somewhere. */

const nodeKinds = ['sources', 'groundingBanks', 'machines', 'inverters', 'loads', 'capacitors'] as const;
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
export type JoinedStudy = {
  nodes: ElementList<'nodes'>;
  nodeIds: IdIndex;
  /** Of lines, then transformers. */
  branchIds: IdIndex;
} & {
  [K in (typeof nodeKinds)[number]]: AtNodes<K>;
} & {
  [K in (typeof branchKinds)[number]]: BetweenNodes<K>;
};

const known = new WeakMap<Study, JoinedStudy>();

/** Gives what a study joins, which is mostly known since it was checked. */
export function joinedStudyOf(study: Study): JoinedStudy {
  const joined = known.get(study);
  if (joined && isStillOf(study, joined)) return joined;
  return checkReferences(study, new Problems());
}

function isStillOf(study: Study, joined: JoinedStudy): boolean {
  const kinds = [...nodeKinds, ...branchKinds];
  return joined.nodes.isOf(study) && kinds.every((kind) => joined[kind].list.isOf(study));
}

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
  const lists = {
    nodes,
    sources: at('sources'),
    groundingBanks: at('groundingBanks'),
    machines: at('machines'),
    inverters: at('inverters'),
    loads: at('loads'),
    capacitors: at('capacitors'),
    lines: between('lines'),
    transformers: between('transformers'),
    switches: between('switches'),
  };
  lists.switches.list.elements.forEach(({ closed }, index) => {
    if (!closed) lists.switches.joins[index] = 0;
  });
  const devices = listOfKind('devices');

  // Which kinds share one set of ids: what refers to them must not be in doubt.
  const index = (...kinds: ElementList<ElementKind>[]) => new IdIndex(kinds, problems);
  const nodeIds = { ids: index(nodes), what: 'node' };
  const branchIds = { ids: index(lists.lines.list, lists.transformers.list), what: 'line or transformer' };
  const joined: JoinedStudy = { ...lists, nodeIds: nodeIds.ids, branchIds: branchIds.ids };
  const generatorIds = {
    ids: index(joined.machines.list, joined.inverters.list),
    what: 'machine or inverter',
  };
  const deviceIds = { ids: index(devices), what: 'device' };
  for (const kind of ['sources', 'switches', 'groundingBanks', 'loads', 'capacitors'] as const) {
    index(joined[kind].list);
  }

  for (const kind of nodeKinds) resolve(joined[kind].list, 'node', nodeIds, problems, joined[kind].node);
  for (const kind of branchKinds) {
    const { list, from, to } = joined[kind];
    resolve(list, 'from', nodeIds, problems, from);
    resolve(list, 'to', nodeIds, problems, to);
    checkEnds(joined[kind], problems);
  }
  const companions: ElementList<ElementKind>[] = [nodes, ...branchKinds.map((kind) => joined[kind].list)];
  const { groundingBanks, loads, capacitors } = joined;
  for (const { list } of [groundingBanks, loads, capacitors]) companions.push(list);
  for (const list of companions) resolve(list, 'with', generatorIds, problems);
  resolve(joined.transformers.list, 'unitMachine', generatorIds, problems);
  resolve(devices, 'branch', branchIds, problems);
  checkFeederLists(
    study,
    { nodes: nodeIds, branches: branchIds, generators: generatorIds, devices: deviceIds },
    joined,
    problems,
  );
  checkScenarioReferences(study, joined, problems);
  if (study.project) refer(study.project.node, nodeIds, '/project/node', problems);
  known.set(study, joined);
  return joined;
}

function checkEnds({ list, from, to }: BetweenNodes, problems: Problems): void {
  for (let index = 0; index < from.length; index++) {
    if (from[index] !== to[index] || from[index] === -1) continue;
    const got = describeValue(list.elements[index]!.to);
    problems.add(() => ({ pointer: list.pointer(index, 'to'), got, expected: 'another node than `from`' }));
  }
}
