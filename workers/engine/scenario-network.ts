import type { Scenario } from '../../shared/schemas/study.ts';
import type { BetweenNodes, JoinedStudy } from './check-references.ts';
import { Problems, describeValue } from './problems.ts';
import { nameOf } from './scenarios.ts';

/* What a scenario makes of the network, for the checks of a study. */

/** Whether a scenario closes a switch that is open otherwise: all else only takes away. */
export function closesAny({ switches: { list } }: JoinedStudy, { switches = {} }: Scenario): boolean {
  return list.elements.some(({ id, closed }) => !closed && positionIn(switches, id) === true);
}

/** Gives the study as a scenario joins it. */
export function joinAsIn({ switches = {}, out = [] }: Scenario, study: JoinedStudy): JoinedStudy {
  const isOut = new Set(out);
  const isNodeOut = Uint8Array.from(study.nodes.elements, ({ id }) => (isOut.has(id) ? 1 : 0));
  const without = <B extends BetweenNodes>(branches: B, isJoined: (index: number) => boolean): B => ({
    ...branches,
    joins: branches.joins.map((_, index) => {
      const meetsNodes = !isNodeOut[branches.from[index]!] && !isNodeOut[branches.to[index]!];
      return meetsNodes && !isOut.has(branches.list.elements[index]!.id) && isJoined(index) ? 1 : 0;
    }),
  });
  const { elements } = study.switches.list;
  return {
    ...study,
    lines: without(study.lines, () => true),
    transformers: without(study.transformers, () => true),
    switches: without(study.switches, (index) => {
      const { id, closed } = elements[index]!;
      return positionIn(switches, id) ?? closed;
    }),
  };
}

/** The own property alone: a switch may be called "constructor". */
function positionIn(switches: Record<string, boolean>, id: string): boolean | undefined {
  return Object.hasOwn(switches, id) ? switches[id] : undefined;
}

/** Notes what a look at a scenario finds as problems of that scenario, which say where in the feeder they show. */
export function noteForScenario(
  scenario: Scenario,
  index: number,
  problems: Problems,
  look: (found: Problems) => void,
): void {
  const found = new Problems();
  look(found);
  for (const { pointer, got, expected } of found.first) {
    problems.push({
      pointer: `/feeder/scenarios/${index}`,
      got: `${got} at ${pointer} in scenario ${describeValue(nameOf(scenario))}`,
      expected,
    });
  }
}
