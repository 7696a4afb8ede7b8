import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Room, RoomNode, RoomSize } from '../../../shared/schemas/rooms.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { listAsked } from '../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { allPhases } from '../case.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import { nameOf } from '../scenarios.ts';
import { prepareModel } from '../prepare-model.ts';
import type { SolvedCase } from '../solve-case.ts';
import { busOfNode } from '../solve-case.ts';
import { makeStateSolvers } from '../state-solver.ts';
import { separateModels } from '../x-over-r.ts';
import { addPlant } from './added-plant.ts';
import { testOf } from './bounds.ts';
import { findContribution, placeContribution } from './contribution.ts';
import { findLoading, placeDevices } from './duties.ts';
import type { LoadPlace } from './loads.ts';
import { nodeQuestions, placeLoads, zoneQuestions } from './loads.ts';
import type { PlantKind } from './plants.ts';
import { makeBareProject } from './plants.ts';
import { makeReverseBounds } from './reverse-flow.ts';
import type { RoomNetwork } from './seen-places.ts';
import { makeRoomNetwork } from './seen-places.ts';
import type { Test } from './sizes.ts';
import { measureRule, mostKva, shrink } from './sizes.ts';
import { boundVoltageChange } from './voltage-change.ts';
import { traceWays } from '../findings/upstream.ts';

/*
 * Room: for every three-phase node above 1 kV the largest plant of inverters and the largest machine that pass all questions whose
 * answer hangs on size and place. One project at a time; room at two nodes does not add up.
 */

const primaryAboveKv = 1;
const networkQuestions = ['contribution', 'interrupting-duty'] as const satisfies readonly QuestionId[];
/** Whose largest size follows from a formula, the same for both kinds of plant. */
const boundQuestions = ['rapid-voltage-change', 'reverse-flow'] as const satisfies readonly QuestionId[];

function listRoomQuestions(ruleSet: RuleSet): { counted: QuestionId[]; notCounted: QuestionId[] } {
  const known = new Set<string>([...zoneQuestions, ...nodeQuestions, ...networkQuestions, ...boundQuestions]);
  const asked = listAsked(ruleSet).map(({ id }) => id as QuestionId);
  return {
    counted: asked.filter((id) => known.has(id)),
    notCounted: asked.filter((id) => !known.has(id)),
  };
}

/** Works out the room of a study's model; its project, if any, is left out. `onNode` is told after each node. */
export function findRoom(
  { project: _, ...study }: Study,
  ruleSet: RuleSet,
  onNode?: (done: number, total: number) => void,
): Room {
  const finder = makeFinder(study, ruleSet);
  const places = finder.nodes;
  const nodes = places.map((node, index) => {
    const found = finder.find(node);
    onNode?.(index + 1, places.length);
    return found;
  });
  return { nodes, ...listRoomQuestions(ruleSet), mostKva };
}

type Bounds = { tests: Test[]; openAbove: [QuestionId, number][] };

function makeFinder(study: Study, ruleSet: RuleSet) {
  const model = prepareModel(study);
  const { base, scenarios } = makeStateSolvers(study, model);
  const solvers = [base, ...scenarios];
  const firstKv = model.nodes[0]!.kv;
  const ways = solvers.map(({ solve }) => traceWays(model, solve('before', firstKv).choice));
  const casesAt = (node: number): OperatingCase[] =>
    solvers.map((solver, index) => ({
      name: solver.scenario && nameOf(solver.scenario),
      solver,
      upstream: ways[index]!(node),
    }));
  const known = new Map<SolvedCase, RoomNetwork>();
  const networkOf = (solved: SolvedCase): RoomNetwork => {
    let network = known.get(solved);
    if (!network) known.set(solved, (network = makeRoomNetwork(solved)));
    return network;
  };
  const state = (name: 'none' | 'before' | 'minimum') => base.solve(name, firstKv);
  const before = state('before');
  const ground = {
    ...{ study, model, ruleSet },
    states: { none: state('none'), before, after: before, minimum: state('minimum') },
  };
  const devices = placeDevices(
    model,
    ruleSet.rules['interrupting-duty'] ? (study.feeder.devices ?? []) : [],
    casesAt(0),
    separateModels(study, model),
    networkOf,
  );
  const lacksGroundSource = (study.feeder.sources ?? []).some(({ max }) => !max.z0);
  const branchOfDevice = new Map(
    (study.feeder.devices ?? []).map(({ id, branch }) => [model.branchIndex.get(branch)!, id]),
  );
  const zones = new Map<string, LoadPlace>();
  const circuitOf = findCircuits(study);
  const boundReverseFlow = makeReverseBounds(study, model, ruleSet);

  function zoneAt(node: number, kind: PlantKind, cases: readonly OperatingCase[]): LoadPlace {
    const devicesOnWay = cases.map(({ upstream }) =>
      upstream.branches.filter((branch) => branchOfDevice.has(branch)).join(),
    );
    const key = `${kind}|${devicesOnWay.join('|')}`;
    let zone = zones.get(key);
    if (!zone) zones.set(key, (zone = placeLoads(ground, cases, node, kind, zoneQuestions)));
    return zone;
  }

  function listNetworkTests(node: number, kind: PlantKind, cases: readonly OperatingCase[]): Test[] {
    const plantAt = (kva: number) => addPlant(kind, busOfNode(before, node), kva, model.baseMva);
    const tests: Test[] = [];
    const { contribution, 'interrupting-duty': duty } = ruleSet.rules;
    const { id, kv } = model.nodes[node]!;
    if (contribution) {
      const places = placeContribution(cases, node, kv, networkOf);
      const limit = { question: 'contribution', element: id };
      tests.push((kva) => measureRule(contribution, findContribution(places, plantAt(kva)), limit));
    }
    for (const device of duty ? devices : []) {
      const limit = { question: 'interrupting-duty', element: device.device.id };
      const loadingAt = (kva: number) => findLoading(device, plantAt(kva), model.baseMva, study.frequencyHz);
      tests.push((kva) => measureRule(duty!, loadingAt(kva), limit));
    }
    return tests;
  }

  /** What bounds both kinds of plant at a node, and what above which size lacks data. */
  function findBounds(node: number, cases: readonly OperatingCase[]): Bounds {
    const fed = cases.filter(({ upstream: { path, isSource } }) => isSource[path.at(-1)!] === 1);
    if (fed.length === 0) {
      const asked = boundQuestions.filter((id) => ruleSet.rules[id]);
      return { tests: [], openAbove: asked.map((id) => [id, -Infinity]) };
    }
    const { id } = model.nodes[node]!;
    const screening = {
      ...{ ...ground, project: makeBareProject('inverters', id, 1), cases },
      ...{ poi: node, upstream: cases[0]!.upstream },
    };
    const reverse = boundReverseFlow(screening, fed);
    return {
      tests: [testOf(boundVoltageChange(ruleSet, model, fed, node)), testOf(reverse?.bound)],
      openAbove: [['reverse-flow', reverse?.openAbove ?? -Infinity]],
    };
  }

  function findSize(node: number, kind: PlantKind, cases: readonly OperatingCase[], bounds: Bounds) {
    const zone = zoneAt(node, kind, cases);
    const here = placeLoads(ground, cases, node, kind, nodeQuestions);
    const tests = [zone.test, here.test, ...bounds.tests, ...listNetworkTests(node, kind, cases)];
    const size = tests.reduce(shrink, { kva: mostKva, bindsAt: null } as RoomSize);
    const open = bounds.openAbove.flatMap(([id, above]) => (size.kva > above ? [id] : []));
    return { size, lacking: [...zone.lacking, ...here.lacking, ...open] };
  }

  return {
    nodes: [...model.nodes.keys()].filter((node) => {
      const { kv, phases } = model.nodes[node]!;
      return phases === allPhases && kv > primaryAboveKv && busOfNode(before, node) !== -1;
    }),
    find(node: number): RoomNode {
      const { id, kv } = model.nodes[node]!;
      const cases = casesAt(node);
      const bounds = findBounds(node, cases);
      const inverters = findSize(node, 'inverters', cases, bounds);
      const machine = findSize(node, 'machine', cases, bounds);
      const lacking = new Set([...inverters.lacking, ...machine.lacking]);
      if (lacksGroundSource) for (const question of networkQuestions) lacking.add(question);
      return {
        node: id,
        circuit:
          cases[0]!.upstream.branches.map((branch) => circuitOf(model.branches[branch]!.id)).find(Boolean) ??
          null,
        kv,
        inverters: inverters.size,
        machine: machine.size,
        lacking: [...lacking],
      };
    },
  };
}

function findCircuits({ feeder }: Study): (branch: string) => string | undefined {
  const { lines = [], transformers = [] } = feeder;
  const circuitOf = new Map([...lines, ...transformers].map(({ id, circuit }) => [id, circuit]));
  return (branch) => circuitOf.get(branch);
}
