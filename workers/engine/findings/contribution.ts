import type { Finding } from '../../../shared/schemas/findings.ts';
import type { NodeState } from '../../../shared/schemas/study-result.ts';
import { reportNode } from '../node-results.ts';
import type { SolvedCase } from '../solve-case.ts';
import { withoutInverters } from '../solve-case.ts';
import { findInverterRaise } from './inverter-raise.ts';
import { answer, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';
import type { Upstream } from './upstream.ts';

const primaryAboveKv = 1;

type Currents = Pick<NodeState, 'threePhase' | 'lineGround'>;

/** What all generation adds in one operating case, over what the sources alone give. */
type Measurement = {
  operating: OperatingCase;
  element: string;
  after: number;
  before: number;
  currents: { none: Currents; after: Currents };
};

/**
 * Does all generation together add little fault current?
 * The larger of (with − none) over three-phase and line-to-ground, over the larger of the two in `none`, at the nearest
 * primary node on the source side; the larger of the phasor sum and the sum of magnitudes decides, and so does the
 * operating case in which it is most.
 */
export function answerContribution(screening: Screening): Finding[] {
  const measured = screening.cases.flatMap((operating) => measure(screening, operating));
  if (measured.length === 0) {
    const element = screening.model.nodes[findPrimary(screening, screening.upstream)]!.id;
    return [
      answer(screening, 'contribution', 'needs-data', { element, note: 'No source feeds this place.' }),
    ];
  }
  const worst = measured.reduce((p, q) => (q.after > p.after * (1 + 1e-9) ? q : p));
  const { element, after, operating, currents } = worst;
  const before = Math.max(...measured.map((each) => each.before)) * 100;
  const finding = judge(screening, 'contribution', {
    element,
    value: after * 100,
    before,
    note: [describe(currents), ...describeDeciding(screening.cases, operating)].join(' '),
  });
  if (finding.verdict === 'within' && lacksGroundSource(screening)) {
    const note = 'A source gives no zero-sequence impedance, so its ground-fault current is not known.';
    return [{ ...answer(screening, 'contribution', 'needs-data', { element, note }), before }];
  }
  return [finding];
}

function findPrimary({ model, poi }: Screening, { path }: Upstream): number {
  return path.find((index) => model.nodes[index]!.kv > primaryAboveKv) ?? poi;
}

/** Measures one operating case; nothing where no source feeds the place in it. */
function measure(screening: Screening, operating: OperatingCase): Measurement[] {
  const node = findPrimary(screening, operating.upstream);
  const { id: element, kv } = screening.model.nodes[node]!;
  const solved = (state: 'none' | 'before' | 'after') => operating.solver.solve(state, kv);
  const none = reportNode(solved('none'), node);
  const base = Math.max(none.threePhase ?? 0, none.lineGround ?? 0);
  if (base === 0) return [];
  const added = (state: 'before' | 'after') => largestIncrease(solved(state), node, none) / base;
  const currents = { none, after: reportNode(solved('after'), node) };
  return [{ operating, element, after: added('after'), before: added('before'), currents }];
}

function largestIncrease(solved: SolvedCase, node: number, none: Currents): number {
  const raised = 1 + findInverterRaise(solved, node);
  const phasors = reportNode(solved, node);
  const magnitudes = reportNode(withoutInverters(solved), node);
  const increase = (kind: keyof Currents) =>
    Math.max(phasors[kind] ?? 0, (magnitudes[kind] ?? 0) * raised) - (none[kind] ?? 0);
  return Math.max(increase('threePhase'), increase('lineGround'));
}

function describe({ none, after }: Measurement['currents']): string {
  const pair = (kind: keyof Currents) =>
    `${amperes(none[kind])} with sources alone, ${amperes(after[kind])} with all`;
  const lineGround = `line to ground ${pair('lineGround')}`;
  return none.threePhase === null ? `${lineGround}.` : `three-phase ${pair('threePhase')}; ${lineGround}.`;
}

function amperes(current: number | null): string {
  return current === null ? 'none' : `${current.toFixed(1)} A`;
}
