import type { Scenario } from '../../shared/schemas/study.ts';
import { allPhases } from './case.ts';
import { checkSupply } from './check-supply.ts';
import type { AtNodes, BetweenNodes, JoinedStudy } from './check-references.ts';
import type { ElementList } from './element-list.ts';
import { DisjointSets } from './graph.ts';
import { lettersOf } from './phase-letters.ts';
import { phaseSet } from './per-unit.ts';
import { PhaseShifts } from './phase-shifts.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';
import { closesAny, joinAsIn, noteForScenario } from './scenario-network.ts';
import type { ElementKind } from './study-elements.ts';
import { clockHourOf } from './transformer-branch.ts';

/* That what is joined can be joined. Everything is looked at with the project and all that came with generators in. */

/** Notes what is wrong with the network as a whole, and with what scenarios make of it; shape and references must be right. */
export function checkNetwork(study: JoinedStudy, scenarios: readonly Scenario[], problems: Problems): void {
  const nodePhases = phasesOfAll(study.nodes.elements);
  const linePhases = phasesOfAll(study.lines.list.elements);
  const before = problems.length;
  checkVoltages(study, problems);
  checkPhases(study, nodePhases, linePhases, problems);
  checkLateralLoops(study, nodePhases, linePhases, problems);
  checkIslands(study, problems);
  // A walk over laterals needs them to be trees, and a phase shift needs what it joins to be three-phase.
  if (problems.length > before) return;
  checkShifts(study, nodePhases, problems);
  checkSupply(study, nodePhases, linePhases, problems);
  if (problems.length > before) return;
  // What a scenario takes away spoils nothing: what it leaves without a source is dead.
  scenarios.forEach((scenario, index) => {
    if (!closesAny(study, scenario)) return;
    const inScenario = joinAsIn(scenario, study);
    noteForScenario(scenario, index, problems, (found) => {
      checkVoltages(inScenario, found);
      checkLateralLoops(inScenario, nodePhases, linePhases, found);
      if (found.length > 0) return;
      checkShifts(inScenario, nodePhases, found);
      checkSupply(inScenario, nodePhases, linePhases, found);
    });
  });
}

function phasesOfAll(elements: readonly { phases: string }[]): Uint8Array {
  const sets = new Uint8Array(elements.length);
  for (let index = 0; index < sets.length; index++) sets[index] = phasesOf(elements[index]!.phases);
  return sets;
}

/** As `phaseSet`, quickly for what most of a feeder is. */
function phasesOf(phases: string): number {
  return phases === 'ABC' ? allPhases : phaseSet(phases);
}

function checkVoltages({ nodes, lines, switches }: JoinedStudy, problems: Problems): void {
  const kv = new Float64Array(nodes.elements.length);
  for (let node = 0; node < kv.length; node++) kv[node] = nodes.elements[node]!.kv;
  const compare = ({ list, from, to }: BetweenNodes, index: number) => {
    const kvFrom = kv[from[index]!]!;
    const kvTo = kv[to[index]!]!;
    if (Math.abs(kvFrom - kvTo) <= 1e-9 * kvFrom) return;
    problems.add(() => ({
      pointer: list.pointer(index),
      got: `${kvFrom} kV at one end and ${kvTo} kV at the other`,
      expected: 'one voltage',
    }));
  };
  for (let index = 0; index < lines.from.length; index++) compare(lines, index);
  for (let index = 0; index < switches.from.length; index++) {
    if (switches.joins[index]) compare(switches, index);
  }
}

function checkPhases(
  study: JoinedStudy,
  nodePhases: Uint8Array,
  linePhases: Uint8Array,
  problems: Problems,
): void {
  const note = (list: ElementList<ElementKind>, index: number, field: string, node: number, phases: number) =>
    problems.add(() => ({
      pointer: list.pointer(index, field),
      got: `${describeValue(study.nodes.elements[node]!.id)} with ${lettersOf(nodePhases[node]!)}`,
      expected: `a node with phases ${lettersOf(phases)}`,
    }));
  const needAtNodes = ({ list, node }: AtNodes, phasesAt: (index: number) => number) => {
    for (let index = 0; index < node.length; index++) {
      const phases = phasesAt(index);
      if (phases & ~nodePhases[node[index]!]!) note(list, index, 'node', node[index]!, phases);
    }
  };
  const needAtEnds = ({ list, from, to }: BetweenNodes, phasesAt: (index: number) => number) => {
    for (let index = 0; index < from.length; index++) {
      const phases = phasesAt(index);
      if (phases & ~nodePhases[from[index]!]!) note(list, index, 'from', from[index]!, phases);
      if (phases & ~nodePhases[to[index]!]!) note(list, index, 'to', to[index]!, phases);
    }
  };
  for (const kind of ['sources', 'machines', 'groundingBanks'] as const)
    needAtNodes(study[kind], () => allPhases);
  for (const kind of ['inverters', 'loads', 'capacitors'] as const) {
    const { elements } = study[kind].list;
    needAtNodes(study[kind], (index) => phasesOf(elements[index]!.phases));
  }
  needAtEnds(study.transformers, () => allPhases);
  needAtEnds(study.lines, (index) => linePhases[index]!);
}

/** The core counts as one place, so that a lateral between two of its buses closes a loop too. */
function checkLateralLoops(
  { lines, switches }: JoinedStudy,
  nodePhases: Uint8Array,
  linePhases: Uint8Array,
  problems: Problems,
): void {
  const core = nodePhases.length;
  const parts = new DisjointSets(core + 1);
  const placeOf = (node: number) => (nodePhases[node] === allPhases ? core : node);
  const join = ({ list, from, to }: BetweenNodes, index: number, isThreePhase: boolean) => {
    const u = placeOf(from[index]!);
    const v = placeOf(to[index]!);
    if ((u === core && v === core && isThreePhase) || parts.join(u, v)) return;
    const got =
      u === core && v === core
        ? 'fewer phases than the two three-phase nodes it joins'
        : 'a loop of laterals';
    problems.add(() => ({ pointer: list.pointer(index), got, expected: 'laterals without loops' }));
  };
  for (let index = 0; index < lines.from.length; index++) {
    if (lines.joins[index]) join(lines, index, linePhases[index] === allPhases);
  }
  for (let index = 0; index < switches.from.length; index++) {
    if (switches.joins[index]) join(switches, index, true);
  }
}

function checkIslands(study: JoinedStudy, problems: Problems): void {
  const { nodes, lines, transformers, switches, sources, machines } = study;
  const count = nodes.elements.length;
  const islands = new DisjointSets(count);
  for (const { from, to, joins } of [lines, transformers, switches]) {
    for (let index = 0; index < from.length; index++) {
      if (joins[index]) islands.join(from[index]!, to[index]!);
    }
  }
  const isFed = new Uint8Array(count);
  for (const { node } of [sources, machines]) for (const at of node) isFed[islands.find(at)] = 1;
  for (let node = 0; node < count; node++) {
    const island = islands.find(node);
    if (isFed[island]) continue;
    isFed[island] = 1;
    problems.add(() => ({
      pointer: nodes.pointer(node),
      got: 'an island with neither source nor machine',
      expected: 'something that feeds it',
    }));
  }
}

/** Around every loop the lags must come to a whole number of turns. */
function checkShifts(
  { lines, transformers, switches }: JoinedStudy,
  nodePhases: Uint8Array,
  problems: Problems,
): void {
  if (transformers.from.length === 0) return;
  const shifts = new PhaseShifts(nodePhases.length);
  const { elements } = transformers.list;
  for (const { from, to, joins } of [switches, lines]) {
    for (let index = 0; index < from.length; index++) {
      if (joins[index]) shifts.join(from[index]!, to[index]!, 0);
    }
  }
  for (let index = 0; index < transformers.from.length; index++) {
    if (!transformers.joins[index]) continue;
    const clockHour = clockHourOf(elements[index]!.connection);
    const there = shifts.join(transformers.from[index]!, transformers.to[index]!, clockHour);
    if (there === clockHour) continue;
    problems.add(() => ({
      pointer: transformers.list.pointer(index),
      got: `a lag of ${clockHour} × 30° where the rest of its loop makes ${there} × 30°`,
      expected: 'phase shifts that agree around the loop',
    }));
  }
}
