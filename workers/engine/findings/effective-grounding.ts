import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Grounding } from '../../../shared/schemas/study-result.ts';
import type { CaseChoice, Opening } from '../case.ts';
import { judgeGrounding } from '../grounding.ts';
import { findFaultPoint, solveCase } from '../solve-case.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { findCutOff, listSectionalizing } from './upstream.ts';

/** What one device cuts off, by node. */
type Cut = { device: string; opening: Opening; area: Uint8Array };

type IslandCase = { device: string; who: string; grounding: Grounding };

const noMachines =
  'No synchronous or induction machine stays behind. What inverters alone do is a separate question, not asked yet.';

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
    cuts.flatMap((cut) => [...projectAlone(screening, cut), ...everyone(screening, cut, true)]),
  );
  if (!worst) return [answer(screening, 'effective-grounding', 'not-applicable', { note: noMachines })];
  const before = findWorst(cuts.flatMap((cut) => everyone(screening, cut, false)));
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

function listCuts({ study, model, upstream, poi }: Screening): Cut[] {
  return listSectionalizing(study, model, upstream).flatMap(({ device, opening }) => {
    const area = findCutOff(upstream, poi, opening.branch);
    return area ? [{ device: device.id, opening, area }] : [];
  });
}

function projectAlone(screening: Screening, cut: Cut): IslandCase[] {
  const choice: Partial<CaseChoice> = { machines: 'project', groundingBanks: 'project', companions: false };
  return solveIsland(screening, cut, "the project's machines alone", choice);
}

function everyone(screening: Screening, cut: Cut, project: boolean): IslandCase[] {
  return solveIsland(screening, cut, 'all machines and ground sources', { project });
}

/** Judges what a cut leaves at the point of interconnection; nothing where no machine stays there. */
function solveIsland(
  { model, poi }: Screening,
  cut: Cut,
  who: string,
  differs: Partial<CaseChoice>,
): IslandCase[] {
  const choice: CaseChoice = {
    sources: 'out',
    prefaultFactor: 1,
    machines: 'all',
    inverters: 'none',
    groundingBanks: 'all',
    project: true,
    companions: true,
    opened: cut.opening,
    ...differs,
  };
  const staysIn = model.machines.some(
    ({ node, ofProject }) => cut.area[node] && (choice.project || !ofProject),
  );
  const point = staysIn ? findFaultPoint(solveCase(model, choice), poi) : undefined;
  return point ? [{ device: cut.device, who, grounding: judgeGrounding(point.z1, point.z2, point.z0) }] : [];
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
