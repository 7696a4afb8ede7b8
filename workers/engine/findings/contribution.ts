import type { NodeState } from '../../../shared/schemas/study-result.ts';
import { nodeAt } from '../model-parts.ts';
import { reportNode } from '../node-results.ts';
import type { SolvedCase } from '../solve-case.ts';
import { withoutInverters } from '../solve-case.ts';
import { workContribution } from './contribution-working.ts';
import { findInverterRaise } from './inverter-raise.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { OwnCurrent } from './own-currents.ts';
import { listOwnCurrents } from './own-currents.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';
import type { Upstream } from './upstream.ts';

const primaryAboveKv = 1;

export type Currents = Pick<NodeState, 'threePhase' | 'lineGround'>;

/** Fault currents with all generation: as phasors, and without inverters with theirs added in magnitude. */
export type WithAll = { phasors: Currents; bare: Currents; raise: number };

/** What all generation adds in one operating case, over what the sources alone give. */
export type Measurement = {
  operating: OperatingCase;
  element: string;
  after: number;
  before: number;
  none: Currents;
  withAll: WithAll;
  /** In place of the increase, where the rule asks for the sum of what each generator gives by itself. */
  own: readonly OwnCurrent[] | undefined;
};

/**
 * Does all generation together add little fault current?
 * The larger of (with − none) over three-phase and line-to-ground, over the larger of the two in `none`, at the nearest
 * primary node on the source side; the larger of the phasor sum and the sum of magnitudes decides, and so does the
 * operating case in which it is most. With the rule's parameter `ownCurrentsSum` the sum of each generator's own current
 * takes the place of the increase.
 */
export function answerContribution(screening: Screening): Answered[] {
  const measured = screening.cases.flatMap((operating) => measure(screening, operating));
  if (measured.length === 0) {
    const element = nodeAt(screening.model, findPrimary(screening, screening.upstream)).id;
    return [
      answer(screening, 'contribution', 'needs-data', { element, note: 'No source feeds this place.' }),
    ];
  }
  const worst = measured.reduce((p, q) => (q.after > p.after * (1 + 1e-9) ? q : p));
  const { element, after, operating } = worst;
  const before = Math.max(...measured.map((each) => each.before)) * 100;
  const finding = judge(screening, 'contribution', {
    element,
    value: after * 100,
    before,
    note: [describe(worst), ...describeDeciding(screening.cases, operating)].join(' '),
    working: workContribution(worst),
  });
  if (finding.verdict === 'within' && lacksGroundSource(screening)) {
    const note = 'A source gives no zero-sequence impedance, so its ground-fault current is not known.';
    return [{ ...answer(screening, 'contribution', 'needs-data', { element, note }), before }];
  }
  return [finding];
}

function findPrimary({ model, poi }: Screening, { path }: Upstream): number {
  return path.find((index) => nodeAt(model, index).kv > primaryAboveKv) ?? poi;
}

/** Measures one operating case; nothing where no source feeds the place in it. */
function measure(screening: Screening, operating: OperatingCase): Measurement[] {
  const node = findPrimary(screening, operating.upstream);
  const { id: element, kv } = nodeAt(screening.model, node);
  const solved = (state: 'none' | 'before' | 'after') => operating.solver.solve(state, kv);
  const none = reportNode(solved('none'), node);
  const base = Math.max(none.threePhase ?? 0, none.lineGround ?? 0);
  if (base === 0) return [];
  const withAll = { before: findWithAll(solved('before'), node), after: findWithAll(solved('after'), node) };
  const wantsOwn = ruleOf(screening, 'contribution').parameters?.ownCurrentsSum === true;
  const own = (state: 'before' | 'after') => listOwnCurrents(screening.study, solved(state), kv);
  const added = (state: 'before' | 'after') =>
    wantsOwn
      ? own(state).reduce((total, { amps }) => total + amps, 0)
      : largestIncrease(withAll[state], none);
  return [
    {
      operating,
      element,
      after: added('after') / base,
      before: added('before') / base,
      none,
      withAll: withAll.after,
      own: wantsOwn ? own('after') : undefined,
    },
  ];
}

function findWithAll(solved: SolvedCase, node: number): WithAll {
  return {
    phasors: reportNode(solved, node),
    bare: reportNode(withoutInverters(solved), node),
    raise: findInverterRaise(solved, node),
  };
}

function largestIncrease({ phasors, bare, raise }: WithAll, none: Currents): number {
  const increase = (kind: keyof Currents) =>
    Math.max(phasors[kind] ?? 0, (bare[kind] ?? 0) * (1 + raise)) - (none[kind] ?? 0);
  return Math.max(increase('threePhase'), increase('lineGround'));
}

function describe({ none, withAll: { phasors }, own }: Measurement): string {
  const pair = (kind: keyof Currents) =>
    `${amperes(none[kind])} with sources alone, ${amperes(phasors[kind])} with all`;
  const lineGround = `line to ground ${pair('lineGround')}`;
  const increases =
    none.threePhase === null ? lineGround : `three-phase ${pair('threePhase')}; ${lineGround}`;
  if (!own) return `${increases}.`;
  const total = own.reduce((sum, { amps }) => sum + amps, 0);
  return `${total.toFixed(1)} A, the sum of each generator's own current, decides; ${increases}.`;
}

function amperes(current: number | null): string {
  return current === null ? 'none' : `${current.toFixed(1)} A`;
}
