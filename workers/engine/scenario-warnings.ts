import { isPresent } from './case.ts';
import { nodeAt } from './model-parts.ts';
import { nameOf } from './scenarios.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode } from './solve-case.ts';
import type { OperatingCases, StateSolver } from './state-solver.ts';
import { listCaseWarnings } from './warnings.ts';

/** Lists by scenario what it leaves dead, and what is amiss in it and not in the model as it stands. */
export function listScenarioWarnings(
  { base, scenarios }: OperatingCases,
  kv: number,
  hasProject: boolean,
): string[] {
  if (scenarios.length === 0) return [];
  const states = hasProject
    ? (['none', 'before', 'after', 'minimum'] as const)
    : (['none', 'before', 'minimum'] as const);
  const casesOf = ({ solve }: StateSolver) => states.map((state) => solve(state, kv));
  const known = listCaseWarnings(casesOf(base));
  return scenarios.flatMap((solver) => {
    const name = JSON.stringify(nameOf(solver.scenario!));
    const dead = listDead(solver.solve('before', kv), base.solve('before', kv));
    const amiss = [...listCaseWarnings(casesOf(solver))].filter((warning) => !known.has(warning));
    return [
      ...(dead.length === 0 ? [] : [`Scenario ${name} leaves dead: ${enumerate(dead)}.`]),
      ...amiss.map((warning) => `Scenario ${name}: ${warning}`),
    ];
  });
}

/** Nodes that nothing feeds before the project, though in the model as it stands something does; not those it takes out. */
function listDead(solved: SolvedCase, base: SolvedCase): string[] {
  const dead: string[] = [];
  for (let node = 0; node < solved.topology.busOf.length; node++) {
    if (isFed(solved, node) || !isFed(base, node)) continue;
    const element = nodeAt(solved.model, node);
    if (isPresent(solved.choice, element)) dead.push(element.id);
  }
  return dead;
}

function isFed(solved: SolvedCase, node: number): boolean {
  const bus = busOfNode(solved, node);
  return bus !== -1 && solved.networks.positive.hasPath[bus] === 1;
}

const mostNamed = 10;

function enumerate(ids: readonly string[]): string {
  const more = ids.length - mostNamed;
  return ids.slice(0, mostNamed).join(', ') + (more > 0 ? ` and ${more} more` : '');
}
