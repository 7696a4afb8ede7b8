import type { VoltageCaseName, VoltageProfile } from '../../../shared/schemas/voltage-profile.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { listFedCases } from '../findings/fed-cases.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import type { Screening } from '../findings/screening.ts';
import { findRise } from '../findings/steady-voltage.ts';
import { rangeAt } from '../findings/voltage-range.ts';
import { eachElement } from '../study-elements.ts';
import type { Flow } from './solve-flow.ts';
import { voltageAt } from './solve-flow.ts';
import type { VoltageCases } from './voltage-cases.ts';
import { voltageCasesOf } from './voltage-cases.ts';
import { countToSubstation } from './voltage-zone.ts';

const caseNames = [
  'minimum-before',
  'minimum-after',
  'peak-before',
  'peak-after',
] as const satisfies readonly VoltageCaseName[];

/**
 * The voltage from the substation's bus to the point of interconnection, in the operating case in which the rise there is
 * largest; undefined where no load flow can be made, as the finding then says why.
 */
export function describeVoltageProfile(screening: Screening): VoltageProfile | undefined {
  const { study, model, poi } = screening;
  if (!study.feeder.loads?.length || !screening.ruleSet.rules['steady-voltage']) return undefined;
  let worst: { size: number; operating: OperatingCase; cases: VoltageCases } | undefined;
  for (const operating of listFedCases(screening)) {
    const cases = voltageCasesOf(screening, operating);
    if ('failure' in cases) return undefined;
    const rise = findRise(cases, poi);
    const size = rise ? rise.after - rise.before : -Infinity;
    if (!worst || size > worst.size + 1e-9) worst = { size, operating, cases };
  }
  if (!worst) return undefined;
  const { operating, cases } = worst;
  const { path } = operating.upstream;
  const way = path.slice(0, countToSubstation(model, operating.upstream) + 1).reverse();
  const km = distancesAlong(screening, way, cases['minimum-after']);
  const pointsOf = (flow: Flow) =>
    way.map((node, index) => {
      const [a, b, c] = [0, 1, 2].map((phase) => voltageAt(flow, node, phase)) as [
        number | null,
        number | null,
        number | null,
      ];
      return {
        node: nodeAt(model, node).id,
        km: km[index]!,
        voltagePu: [a, b, c] as [typeof a, typeof b, typeof c],
      };
    });
  const onWay = new Map(way.map((node, index) => [node, index]));
  const regulators = (study.feeder.regulators ?? []).flatMap(({ id, branch, end }) => {
    const index = model.branchIndex.get(branch);
    if (index === undefined) return [];
    const { from, to } = branchAt(model, index);
    if (!onWay.has(from) || !onWay.has(to)) return [];
    return [{ id, km: km[onWay.get(end === 'from' ? from : to)!]! }];
  });
  return {
    operatingCase: operating.name ?? '',
    cases: caseNames.map((name) => ({ name, points: pointsOf(cases[name]) })),
    regulators,
    ...rangeAt(screening, nodeAt(model, poi).kv),
  };
}

/** Lengths of lines add up; transformers and switches have none. */
function distancesAlong({ study, model }: Screening, way: readonly number[], flow: Flow): number[] {
  const kmOf = new Map<string, number>();
  for (const { element } of eachElement(study, 'lines'))
    kmOf.set(element.id, 'km' in element ? element.km : 0);
  const { placeOf, branch, parent, nodeOf } = flow.network;
  let total = 0;
  return way.map((node, index) => {
    if (index === 0) return 0;
    const place = placeOf[node]!;
    const above = placeOf[way[index - 1]!]!;
    // The way and the trees of the flow agree but for loops, whose cut may lie on the way.
    const along = parent[place] === above ? branch[place]! : findBranch(model, nodeOf[above]!, node);
    total += along === -1 ? 0 : (kmOf.get(branchAt(model, along).id) ?? 0);
    return total;
  });
}

function findBranch({ branches }: Screening['model'], p: number, q: number): number {
  return branches.findIndex(({ from, to }) => (from === p && to === q) || (from === q && to === p));
}
