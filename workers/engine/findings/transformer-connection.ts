import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Circuit, Project, Study } from '../../../shared/schemas/study.ts';
import { allPhases } from '../case.ts';
import { phaseSet } from '../per-unit.ts';
import { prepareModel } from '../prepare-model.ts';
import { solveCase } from '../solve-case.ts';
import { answer } from './judge.ts';
import type { Screening } from './screening.ts';

type Connection = 'three-phase' | 'phase-to-phase' | 'line-to-neutral';

/**
 * Does the way the project connects suit the type of line? (SGIP 2.2.1.6.)
 * Three-wire: three-phase or phase to phase. Four-wire: effectively grounded three-phase, or line to neutral.
 */
export function answerTransformerConnection(
  screening: Screening,
  effectiveGrounding: readonly Finding[],
): Finding[] {
  const reply = (verdict: Finding['verdict'], note: string) => [
    answer(screening, 'transformer-connection', verdict, { element: screening.project.id, note }),
  ];
  const connections = connectionsOf(screening.project);
  if (connections.size === 0) return reply('not-applicable', 'The project has no generator.');
  const lineType = findCircuit(screening)?.lineType;
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
  if (!isGroundSource(screening.study, screening.project)) {
    return reply(
      'outside',
      'A four-wire line, and the project gives ground-fault current no path: it is not grounded.',
    );
  }
  const grounding = effectiveGrounding[0]?.verdict;
  if (grounding === 'outside') {
    return reply('outside', 'A four-wire line; the project is grounded, but not effectively.');
  }
  if (grounding === 'needs-data') {
    return reply('needs-data', 'A four-wire line; whether the project is effectively grounded is not known.');
  }
  return reply('within', 'A four-wire line, and the project is a ground source on it.');
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

/** The circuit of the first branch towards the source that names one; else the model's only one. */
function findCircuit({ study, model, upstream }: Screening): Circuit | undefined {
  const { lines = [], transformers = [], circuits = [] } = study.feeder;
  const nameOf = new Map([...lines, ...transformers].map((branch) => [branch.id, branch.circuit]));
  const name = upstream.branches.map((branch) => nameOf.get(model.branches[branch]!.id)).find(Boolean);
  if (name) return circuits.find((circuit) => circuit.id === name);
  return circuits.length === 1 ? circuits[0] : undefined;
}

/** Whether the project, seen from its point of interconnection with nothing else there, closes the zero sequence. */
function isGroundSource(study: Study, project: Project): boolean {
  const bare = prepareModel({ ...study, feeder: { nodes: study.feeder.nodes } });
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
