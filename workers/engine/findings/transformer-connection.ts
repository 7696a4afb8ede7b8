import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Project, Study } from '../../../shared/schemas/study.ts';
import { allPhases } from '../case.ts';
import { phaseSet } from '../per-unit.ts';
import { prepareModel } from '../prepare-model.ts';
import { solveCase } from '../solve-case.ts';
import { findCircuit } from './circuits.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { AnswerOf } from './questions.ts';
import type { Screening } from './screening.ts';

type Connection = 'three-phase' | 'phase-to-phase' | 'line-to-neutral';

type Reply = { verdict: Answered['verdict']; note: string };

/**
 * Does the way the project connects suit the type of line? (SGIP 2.2.1.6.)
 * Three-wire: three-phase or phase to phase. Four-wire: effectively grounded three-phase, or line to neutral. Put to the
 * circuit that feeds the place in each operating case; the worst decides.
 */
export function answerTransformerConnection(screening: Screening, answerOf: AnswerOf): Answered[] {
  const element = screening.project.id;
  const connections = connectionsOf(screening.project);
  if (connections.size === 0) {
    const note = 'The project has no generator.';
    return [answer(screening, 'transformer-connection', 'not-applicable', { element, note })];
  }
  const replies = screening.cases
    .filter(({ name, upstream }) => name === undefined || upstream.isSource[upstream.path.at(-1)!])
    .map((operating) => ({ operating, ...replyFor(screening, operating, connections, answerOf) }));
  const worst = replies.reduce((p, q) => (rankOf(q) > rankOf(p) ? q : p));
  const { name } = worst.operating;
  const where = name === undefined ? '' : ` So it is in operating case ${JSON.stringify(name)}.`;
  return [
    answer(screening, 'transformer-connection', worst.verdict, { element, note: `${worst.note}${where}` }),
  ];
}

const rankOf = ({ verdict }: Reply) => ['within', 'needs-data', 'outside'].indexOf(verdict);

function replyFor(
  screening: Screening,
  { upstream }: OperatingCase,
  connections: ReadonlySet<Connection>,
  answerOf: AnswerOf,
): Reply {
  const reply = (verdict: Answered['verdict'], note: string) => ({ verdict, note });
  const lineType = findCircuit(screening, upstream)?.lineType;
  if (!lineType) return reply('needs-data', 'The line type of the circuit is not known.');
  if (lineType === 'three-wire') {
    return connections.has('line-to-neutral')
      ? reply('outside', 'A three-wire line has no neutral for a line-to-neutral generator.')
      : reply('within', `A three-wire line; the project connects ${[...connections].join(' and ')}.`);
  }
  if (connections.has('phase-to-phase')) {
    return reply('outside', 'On a four-wire line a single-phase generator belongs between line and neutral.');
  }
  if (!connections.has('three-phase'))
    return reply('within', 'A four-wire line; the project connects line to neutral.');
  if (!isGroundSource(screening)) {
    return reply(
      'outside',
      'A four-wire line, and the project gives ground-fault current no path: it is not grounded.',
    );
  }
  const grounding = judgeGrounding(screening.project, answerOf);
  if (grounding === 'outside') {
    return reply('outside', 'A four-wire line; the project is grounded, but not effectively.');
  }
  if (grounding === 'needs-data') {
    return reply('needs-data', 'A four-wire line; whether the project is effectively grounded is not known.');
  }
  return reply('within', 'A four-wire line, and the project is a ground source on it.');
}

/** What the rules that ask about grounding say of what the project has. */
function judgeGrounding({ machines = [], inverters = [] }: Project, answerOf: AnswerOf): Reply['verdict'] {
  const asked: QuestionId[] = [
    ...(machines.length > 0 ? (['effective-grounding'] as const) : []),
    ...(inverters.length > 0 ? (['inverter-grounding'] as const) : []),
  ];
  // A question that the rules do not ask has no answer, and what nobody asked is not known.
  const verdicts = asked.flatMap((id): Reply['verdict'][] => {
    const answers = answerOf(id);
    return answers.length === 0 ? ['needs-data'] : answers.map(({ verdict }) => verdict);
  });
  if (verdicts.includes('outside')) return 'outside';
  return verdicts.includes('needs-data') ? 'needs-data' : 'within';
}

function connectionsOf({ machines = [], inverters = [] }: Project): Set<Connection> {
  const connections = new Set<Connection>();
  if (machines.length > 0) connections.add('three-phase');
  for (const { phases } of inverters) {
    if (phaseSet(phases) === allPhases) connections.add('three-phase');
    else connections.add(phases.length === 2 ? 'phase-to-phase' : 'line-to-neutral');
  }
  return connections;
}

const known = new WeakMap<Screening, boolean>();

/** Whether the project, seen from its point of interconnection with nothing else there, closes the zero sequence. */
function isGroundSource(screening: Screening): boolean {
  let isOne = known.get(screening);
  if (isOne === undefined) known.set(screening, (isOne = closesZeroSequence(screening)));
  return isOne;
}

function closesZeroSequence({ study, project }: { study: Study; project: Project }): boolean {
  const named = new Set<string | undefined>([project.node]);
  for (const list of Object.values(project)) {
    if (!Array.isArray(list)) continue;
    for (const { node, from, to } of list as { node?: string; from?: string; to?: string }[]) {
      named.add(node).add(from).add(to);
    }
  }
  // Of the feeder only the nodes that the project names: most of a large one has nothing to do with it.
  const nodes = study.feeder.nodes.filter(({ id }) => named.has(id));
  const bare = prepareModel({ ...study, feeder: { nodes } });
  const { topology, networks } = solveCase(bare, {
    sources: 'out',
    prefaultFactor: 1,
    machines: 'all',
    inverters: 'none',
    groundingBanks: 'all',
    project: true,
    companions: true,
  });
  const bus = topology.busOf[bare.nodeIndex.get(project.node)!]!;
  return bus !== -1 && networks.zero.hasPath[bus] === 1;
}
