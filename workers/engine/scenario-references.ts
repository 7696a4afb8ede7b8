import type { Study } from '../../shared/schemas/study.ts';
import type { JoinedStudy } from './check-references.ts';
import type { ElementList } from './element-list.ts';
import type { Problems } from './problems.ts';
import { describeValue, escapeKey } from './problems.ts';
import type { ElementKind } from './study-elements.ts';

/** Where ids are, kind by kind, of those that scenarios name. */
type Holders = Map<string, { what: string; ofProject: boolean }[]>;

const words = {
  nodes: 'node',
  sources: 'source',
  groundingBanks: 'grounding bank',
  machines: 'machine',
  inverters: 'inverter',
  loads: 'load',
  capacitors: 'capacitor',
  lines: 'line',
  transformers: 'transformer',
  switches: 'switch',
} as const;

/** Notes what scenarios name that is not in the feeder, or that elements of several kinds are called. */
export function checkScenarioReferences({ feeder }: Study, joined: JoinedStudy, problems: Problems): void {
  const scenarios = feeder.scenarios ?? [];
  if (scenarios.length === 0) return;
  const holders = findHolders(
    new Set(scenarios.flatMap(({ switches = {}, out = [] }) => [...Object.keys(switches), ...out])),
    joined,
  );
  scenarios.forEach(({ switches = {}, out = [] }, index) => {
    const scenario = `/feeder/scenarios/${index}`;
    for (const id of Object.keys(switches)) {
      if (holders.get(id)!.some(({ what, ofProject }) => what === words.switches && !ofProject)) continue;
      problems.add(() => ({
        pointer: `${scenario}/switches/${escapeKey(id)}`,
        got: describeValue(id),
        expected: 'the id of a switch of the feeder',
      }));
    }
    out.forEach((id, place) => {
      const those = holders.get(id)!;
      if (those.length === 1 && !those[0]!.ofProject) return;
      const twice = those.length > 1 ? `, the id of a ${those.map(({ what }) => what).join(' and a ')}` : '';
      problems.add(() => ({
        pointer: `${scenario}/out/${place}`,
        got: `${describeValue(id)}${twice}`,
        expected: 'the id of one element of the feeder',
      }));
    });
  });
}

function findHolders(ids: ReadonlySet<string>, joined: JoinedStudy): Holders {
  const holders: Holders = new Map(Array.from(ids, (id) => [id, []]));
  for (const kind of Object.keys(words) as (keyof typeof words)[]) {
    const list: ElementList<ElementKind> = kind === 'nodes' ? joined.nodes : joined[kind].list;
    list.elements.forEach(({ id }, index) => {
      holders.get(id)?.push({ what: words[kind], ofProject: list.isOfProject(index) });
    });
  }
  return holders;
}
