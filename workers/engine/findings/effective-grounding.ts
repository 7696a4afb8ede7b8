import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Grounding } from '../../../shared/schemas/study-result.ts';
import type { CaseChoice, Opening } from '../case.ts';
import { judgeGrounding } from '../grounding.ts';
import { openingsSeenFrom } from '../one-opening.ts';
import { solveCase } from '../solve-case.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { listSectionalizing, traceCuts } from './upstream.ts';

/** An opening that leaves the point of interconnection without any source, and whether it leaves it machines. */
type Cut = { device: string; opening: Opening; keepsMachine: boolean; keepsFeederMachine: boolean };

type IslandCase = { device: string; who: string; grounding: Grounding };

const noMachines =
  'No synchronous or induction machine stays behind. What inverters alone do is a separate question, not asked yet.';

const allOfThem = 'all machines and ground sources';

/**
 * Do healthy phases stay in bounds when the utility is gone and a line touches ground?
 * Opens the feeder breaker, then each automatic device on the way to the point of interconnection, and judges what lies
 * beyond by its coefficient of grounding: with the project's machines and ground sources alone, then with everyone's.
 * IEEE 142 and C62.92.1 (values from memory) add X0/X1 ≤ 3 and R0/X1 ≤ 1, which are shown and do not decide.
 */
export function answerEffectiveGrounding(screening: Screening): Finding[] {
  const { study, project, ruleSet } = screening;
  if (![study.feeder, project].some(({ machines = [] }) => machines.length > 0)) {
    return [answer(screening, 'effective-grounding', 'not-applicable', { note: noMachines })];
  }
  const cuts = listCuts(screening);
  if (cuts.length === 0) {
    const note =
      'No breaker or sectionalising device is known that would cut this place off from its source.';
    return [answer(screening, 'effective-grounding', 'needs-data', { note })];
  }
  const worst = findWorst(
    interleave(
      judgeIslands(screening, cuts, "the project's machines alone", {
        machines: 'project',
        groundingBanks: 'project',
        companions: false,
      }),
      judgeIslands(screening, cuts, allOfThem, {}),
    ),
  );
  if (!worst) return [answer(screening, 'effective-grounding', 'not-applicable', { note: noMachines })];
  const before = findWorst(interleave(judgeIslands(screening, cuts, allOfThem, { project: false })));
  const atPrefault = ruleSet.rules['effective-grounding'].prefaultFactor ?? 1;
  return [
    judge(screening, 'effective-grounding', {
      element: worst.device,
      value: worst.grounding.cogPercent * atPrefault,
      ...(before ? { before: before.grounding.cogPercent * atPrefault } : {}),
      note: describe(worst, atPrefault),
    }),
  ];
}

function listCuts({ study, model, upstream }: Screening): Cut[] {
  const { isCut, since } = traceCuts(upstream);
  const nearest = (machines: readonly { node: number }[]) =>
    machines.reduce(
      (first, { node }) => (since[node] === -1 ? first : Math.min(first, since[node]!)),
      Infinity,
    );
  const nearestOfAll = nearest(model.machines);
  const nearestOfFeeder = nearest(model.machines.filter(({ ofProject }) => !ofProject));
  return listSectionalizing(study, model, upstream)
    .filter(({ place }) => isCut[place])
    .map(({ device, opening, place }) => ({
      device: device.id,
      opening,
      keepsMachine: nearestOfAll <= place,
      keepsFeederMachine: nearestOfFeeder <= place,
    }));
}

/**
 * Judges what each cut leaves at the point of interconnection, nothing where no machine stays there. The network is solved
 * once, with the sources out; each cut is then one branch opened in it.
 */
function judgeIslands(
  { model, poi }: Screening,
  cuts: readonly Cut[],
  who: string,
  differs: Partial<CaseChoice>,
): (IslandCase | undefined)[] {
  const choice: CaseChoice = {
    sources: 'out',
    prefaultFactor: 1,
    machines: 'all',
    inverters: 'none',
    groundingBanks: 'all',
    project: true,
    companions: true,
    ...differs,
  };
  const solved = solveCase(model, choice);
  const findPoint = openingsSeenFrom(solved, poi);
  return cuts.map((cut) => {
    const staysIn = choice.project ? cut.keepsMachine : cut.keepsFeederMachine;
    const point = staysIn ? findPoint(cut.opening) : undefined;
    return point && { device: cut.device, who, grounding: judgeGrounding(point.z1, point.z2, point.z0) };
  });
}

/** Cut by cut, the cases of each list. */
function interleave(...lists: readonly (readonly (IslandCase | undefined)[])[]): IslandCase[] {
  return lists[0]!.flatMap((_, place) => lists.flatMap((list) => list[place] ?? []));
}

/** The first of equals, so that the device nearest the source is named; rounding does not make a difference. */
function findWorst(cases: readonly IslandCase[]): IslandCase | undefined {
  const highest = Math.max(...cases.map(({ grounding }) => grounding.cogPercent));
  return cases.find(({ grounding }) => grounding.cogPercent >= highest * (1 - 1e-9));
}

function describe({ device, who, grounding }: IslandCase, atPrefault: number): string {
  const { x0x1, r0x1 } = grounding;
  const ratios =
    x0x1 === null || r0x1 === null
      ? 'the zero sequence is open'
      : `X0/X1 ${x0x1.toFixed(2)}, R0/X1 ${r0x1.toFixed(2)}`;
  return `Worst with ${device} open and ${who}; ${ratios}. Coefficient of grounding at ${atPrefault} of nominal voltage.`;
}
