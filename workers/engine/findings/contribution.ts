import type { Finding } from '../../../shared/schemas/findings.ts';
import type { NodeState } from '../../../shared/schemas/study-result.ts';
import { reportNode } from '../node-results.ts';
import type { SolvedCase } from '../solve-case.ts';
import { solveCase } from '../solve-case.ts';
import { findInverterRaise } from './inverter-raise.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';

const primaryAboveKv = 1;

type Currents = Pick<NodeState, 'threePhase' | 'lineGround'>;

/**
 * Does all generation together add little fault current?
 * The larger of (with − none) over three-phase and line-to-ground, over the larger of the two in `none`, at the nearest
 * primary node on the source side; the larger of the phasor sum and the sum of magnitudes decides.
 */
export function answerContribution(screening: Screening): Finding[] {
  const { model, solver, upstream, poi } = screening;
  const node = upstream.path.find((index) => model.nodes[index]!.kv > primaryAboveKv) ?? poi;
  const { id: element, kv } = model.nodes[node]!;
  const [stateNone, stateBefore, stateAfter] = (['none', 'before', 'after'] as const).map((state) =>
    solver.solve(state, kv),
  ) as [SolvedCase, SolvedCase, SolvedCase];
  const none = reportNode(stateNone, node);
  const base = Math.max(none.threePhase ?? 0, none.lineGround ?? 0);
  if (base === 0) {
    return [
      answer(screening, 'contribution', 'needs-data', { element, note: 'No source feeds this place.' }),
    ];
  }
  const added = (solved: SolvedCase) => largestIncrease(solved, node, none) / base;
  const after = added(stateAfter);
  const finding = judge(screening, 'contribution', {
    element,
    value: after * 100,
    before: added(stateBefore) * 100,
    note: describe(none, reportNode(stateAfter, node)),
  });
  if (finding.verdict === 'within' && lacksGroundSource(screening)) {
    const note = 'A source gives no zero-sequence impedance, so its ground-fault current is not known.';
    return [
      { ...answer(screening, 'contribution', 'needs-data', { element, note }), before: finding.before },
    ];
  }
  return [finding];
}

function largestIncrease(solved: SolvedCase, node: number, none: Currents): number {
  const withoutInverters = solveCase(solved.model, { ...solved.choice, inverters: 'none' });
  const raised = 1 + findInverterRaise(solved, node);
  const phasors = reportNode(solved, node);
  const magnitudes = reportNode(withoutInverters, node);
  const increase = (kind: keyof Currents) =>
    Math.max(phasors[kind] ?? 0, (magnitudes[kind] ?? 0) * raised) - (none[kind] ?? 0);
  return Math.max(increase('threePhase'), increase('lineGround'));
}

function describe(none: Currents, after: Currents): string {
  const pair = (kind: keyof Currents) =>
    `${amperes(none[kind])} with sources alone, ${amperes(after[kind])} with all`;
  const lineGround = `line to ground ${pair('lineGround')}`;
  return none.threePhase === null ? `${lineGround}.` : `three-phase ${pair('threePhase')}; ${lineGround}.`;
}

function amperes(current: number | null): string {
  return current === null ? 'none' : `${current.toFixed(1)} A`;
}
