import type { Grounding } from '../../../shared/schemas/study-result.ts';
import { scale } from '../complex.ts';
import { findHealthyPhases, judgeGrounding } from '../grounding.ts';
import { nodeAt } from '../model-parts.ts';
import { baseOhms } from '../per-unit.ts';
import { Working } from '../working.ts';
import { explainHealthyPhases } from './healthy-phase-working.ts';
import type { IslandNetwork, SeenImpedances } from './island-network.ts';
import { cutOutIslands, seeFromPoi } from './island-network.ts';
import type { Island } from './islands.ts';
import { answerWithoutIslands, joinGaps } from './island-gaps.ts';
import { listIslands } from './islands.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import { listCombinations } from './other-ground-sources.ts';
import type { Screening } from './screening.ts';

type IslandCase = {
  operating: OperatingCase;
  island: Island;
  words: string;
  seen: SeenImpedances;
  grounding: Grounding;
};

const noMachines =
  'No synchronous or induction machine stays behind. What inverters alone do is a question of its own.';

/**
 * Do healthy phases stay in bounds when the utility is gone and a line touches ground?
 * Opens the feeder breaker, then each automatic device on the way to the point of interconnection, in every operating case,
 * and judges what lies beyond by its coefficient of grounding, with machines and ground sources of others in and out.
 * Rule parameters `x0OverX1` and `r0OverX1` are the usual criterion of IEEE 142, which is shown and does not decide.
 */
export function answerEffectiveGrounding(screening: Screening): Answered[] {
  const { study, project } = screening;
  if (![study.feeder, project].some(({ machines = [] }) => machines.length > 0)) {
    return [answer(screening, 'effective-grounding', 'not-applicable', { note: noMachines })];
  }
  const without = answerWithoutIslands(screening, 'effective-grounding');
  if (without) return [without];
  const networks = listIslands(screening).flatMap((ofCase) => {
    const network = cutOutIslands(screening, ofCase);
    return network ? [{ operating: ofCase.operating, network }] : [];
  });
  const judged = networks.flatMap(({ operating, network }) => judgeIslands(operating, network, true));
  const worst = findWorst(judged);
  if (!worst) {
    const none = answer(screening, 'effective-grounding', 'not-applicable', { note: noMachines });
    return joinGaps(screening, 'effective-grounding', [none]);
  }
  const before = findWorst(
    networks.flatMap(({ operating, network }) => judgeIslands(operating, network, false)),
  );
  const atPrefault = ruleOf(screening, 'effective-grounding').prefaultFactor ?? 1;
  const judgedWorst = judge(screening, 'effective-grounding', {
    element: worst.island.device.id,
    value: worst.grounding.cogPercent * atPrefault,
    ...(before ? { before: before.grounding.cogPercent * atPrefault } : {}),
    note: describe(screening, worst, atPrefault),
    working: explain(screening, worst, atPrefault),
  });
  return joinGaps(screening, 'effective-grounding', [judgedWorst]);
}

/** Judges the islands of one operating case, device by device, in each combination of what others have in. */
function judgeIslands(operating: OperatingCase, network: IslandNetwork, project: boolean): IslandCase[] {
  const combinations = listCombinations(network).filter(({ machines }) => project || machines === 'all');
  const seen = combinations.map(({ machines, banks, out }) =>
    seeFromPoi(network, { machines, banks, out, project, companions: machines === 'all' }),
  );
  return network.islands.flatMap((island, place) =>
    combinations.flatMap(({ words }, which) => {
      const point = seen[which]![place];
      if (!point) return [];
      const grounding = judgeIsland(point);
      return [{ operating, island, words, seen: point, grounding }];
    }),
  );
}

/** Where nothing is earthed, two phases to ground can lift the third above line to line: with Z2 over Z1, 3·Z2/(Z1 + Z2). */
function judgeIsland({ z1, z2, z0 }: SeenImpedances): Grounding {
  const grounding = judgeGrounding(z1, z2, z0);
  const { lineGround, lineLineGround } = findHealthyPhases(z1, z2, z0);
  const healthyPhasePu = Math.max(lineGround, lineLineGround);
  return { ...grounding, healthyPhasePu, cogPercent: (healthyPhasePu / Math.sqrt(3)) * 100 };
}

/** The first of equals, so that the device nearest the source is named; rounding does not make a difference. */
function findWorst(cases: readonly IslandCase[]): IslandCase | undefined {
  const highest = Math.max(...cases.map(({ grounding }) => grounding.cogPercent));
  return cases.find(({ grounding }) => grounding.cogPercent >= highest * (1 - 1e-9));
}

function describe(
  screening: Screening,
  { island, words, grounding, operating }: IslandCase,
  atPrefault: number,
): string {
  const { x0x1, r0x1 } = grounding;
  const { x0OverX1, r0OverX1 } = ruleOf(screening, 'effective-grounding').parameters ?? {};
  const usual =
    x0OverX1 === undefined || r0OverX1 === undefined
      ? ''
      : ` (usually at most ${x0OverX1} and ${r0OverX1}, which does not decide)`;
  const ratios =
    x0x1 === null || r0x1 === null
      ? 'the zero sequence is open'
      : `X0/X1 ${x0x1.toFixed(2)}, R0/X1 ${r0x1.toFixed(2)}${usual}`;
  return [
    `Worst with ${island.device.id} open${words && `, ${words}`}; ${ratios}.`,
    `Coefficient of grounding at ${atPrefault} of nominal voltage.`,
    ...describeDeciding(screening.cases, operating),
  ].join(' ');
}

function explain(screening: Screening, { island, seen, grounding }: IslandCase, atPrefault: number) {
  const { model, poi } = screening;
  const ohms = baseOhms(model.baseMva, nodeAt(model, poi).kv);
  const working = new Working();
  const where = `at ${screening.project.node} with ${island.device.id} open, from the network beyond it`;
  const given = (symbol: 'Z1' | 'Z2' | 'Z0', name: string, z: SeenImpedances['z0']) =>
    working.given(symbol, `${name} sequence impedance ${where}`, scale(z!, ohms), 'Ω');
  const z1 = given('Z1', 'Positive', seen.z1);
  const z2 = given('Z2', 'Negative', seen.z2);
  const z0 = seen.z0 ? given('Z0', 'Zero', seen.z0) : undefined;
  if (z0) {
    const ratio = (symbol: string, words: string, formula: string, value: number) =>
      working.compute(
        { symbol, words: `${words}, shown and not deciding`, unit: '' },
        formula,
        [z0, z1],
        value,
      );
    ratio('X0_X1', 'X0 over X1', 'im(Z0)/im(Z1)', grounding.x0x1!);
    // Resistance that is next to nothing is printed as none.
    const r0x1 = Math.abs(grounding.r0x1!) < 1e-9 ? 0 : grounding.r0x1!;
    ratio('R0_X1', 'R0 over X1', 're(Z0)/im(Z1)', r0x1);
  }
  const healthy = explainHealthyPhases(working, { z1, z2, z0 });
  const percent = working.compute(
    { symbol: 'COG', words: 'Coefficient of grounding: that voltage over line to line', unit: '%' },
    'V_max/sqrt(3)*100',
    [healthy],
    grounding.cogPercent,
  );
  const prefault = working.given(
    'E',
    'Voltage before the fault over nominal, from the rule set',
    atPrefault,
    'pu',
  );
  working.compute(
    { symbol: 'COG_E', words: 'Coefficient of grounding at that voltage', unit: '%' },
    'COG*E',
    [percent, prefault],
    grounding.cogPercent * atPrefault,
  );
  return working.steps;
}
