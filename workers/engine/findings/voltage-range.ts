import type { VoltageCaseName } from '../../../shared/schemas/voltage-profile.ts';
import { usualSteps } from '../flow/flow-controls.ts';
import type { FlowLoad } from '../flow/injections.ts';
import type { Flow } from '../flow/solve-flow.ts';
import { voltageAt } from '../flow/solve-flow.ts';
import type { VoltageCases } from '../flow/voltage-cases.ts';
import { flowLoads } from '../flow/voltage-cases.ts';
import { listJudgedNodes } from '../flow/voltage-zone.ts';
import { nodeAt } from '../model-parts.ts';
import { Working } from '../working.ts';
import type { Answered } from './judge.ts';
import { judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import { limitedTo, numberOf, sourceOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';
import type { Solved } from './steady-voltage.ts';

const id = 'steady-voltage';

type Extreme = {
  flow: Flow;
  node: number;
  phase: number;
  load: FlowLoad;
  volts: number;
  /** Nothing where the node is dead without the project. */
  before: number | null;
  isHigh: boolean;
  /** How far out of its range it is, per unit; less than nothing within it. */
  beyond: number;
};

export type VoltageRange = { lowPu: number; highPu: number };

/** The range of a node by its voltage, from the rule. */
export function rangeAt(screening: Screening, kv: number): VoltageRange {
  const kind = kv > numberOf(screening, id, 'serviceUpToKv') ? 'primary' : 'service';
  return {
    lowPu: numberOf(screening, id, `${kind}LowPu`),
    highPu: numberOf(screening, id, `${kind}HighPu`),
  };
}

/**
 * The node, of all that are judged, whose voltage is furthest out of its range or nearest to the end of it. What is out
 * without the project too, and made no worse by it, hides no other: it is said of in a second finding, as a note.
 */
export function answerRange(screening: Screening, solved: readonly Solved[]): Answered[] {
  const found = solved.map(({ operating, cases }) => ({
    operating,
    ...findExtremes(screening, operating, cases),
  }));
  return (['own', 'standing'] as const).flatMap((kind) => {
    const extremes = found.flatMap(({ operating, [kind]: extreme }) =>
      extreme ? [{ operating, ...extreme }] : [],
    );
    if (extremes.length === 0) return [];
    const worst = extremes.reduce((p, q) => (q.beyond > p.beyond + 1e-9 ? q : p));
    return [judgeExtreme(screening, worst, kind === 'standing')];
  });
}

function judgeExtreme(
  screening: Screening,
  { operating, flow, node, phase, load, volts, before, isHigh }: Extreme & { operating: OperatingCase },
  isStanding: boolean,
): Answered {
  const { id: name, kv } = nodeAt(screening.model, node);
  const { lowPu, highPu } = rangeAt(screening, kv);
  const working = new Working();
  const when = `${name}, phase ${'ABC'[phase]!}, ${load} load`;
  const lineToNeutral = (volts * kv * 1000) / Math.sqrt(3);
  const actual = working.given('U', `Voltage to neutral at ${when}, by load flow`, lineToNeutral, 'V');
  const nominal = working.given('U_n', 'Nominal voltage between phases there', kv, 'kV');
  working.compute(
    { symbol: 'V', words: 'Over nominal', unit: 'pu' },
    'U/(U_n*1000/sqrt(3))',
    [actual, nominal],
    volts,
  );
  const limited = limitedTo(screening, id, {
    limit: isHigh ? highPu : lowPu,
    comparison: isHigh ? '<=' : '>=',
    unit: 'pu',
    source: sourceOf(screening, id, 'rangeSource'),
    ...(isStanding && { consequence: 'note' as const }),
  });
  const which = isStanding ? 'furthest out' : `nearest to the ${isHigh ? 'top' : 'bottom'}`;
  const without = before === null ? 'none' : before.toFixed(4);
  return judge(limited, id, {
    element: isStanding ? `${name} (out before)` : name,
    value: volts,
    before,
    working: working.steps,
    note: [
      `The voltage ${which} of its range of ${lowPu} to ${highPu} is at ${when}: ${volts.toFixed(4)} with the project, ${without} without.`,
      ...(isStanding ? ['It is out of range without the project too, which does not make it worse.'] : []),
      ...describeEnds(screening, flow),
      ...describeDeciding(screening.cases, operating),
    ].join(' '),
  });
}

/** Names the regulators that have no tap left: where power flows back, one that holds the wrong side gets there. */
function describeEnds({ study }: Screening, { state }: Flow): string[] {
  const atEnd = (study.feeder.regulators ?? []).filter(({ id: regulator, steps }) =>
    state.taps.get(regulator)?.some((tap) => Math.abs(tap) === (steps ?? usualSteps)),
  );
  return atEnd.map(({ id: regulator, reverse }) =>
    reverse === 'bidirectional'
      ? `Regulator ${regulator} stands at its last tap: where power flows back it tries to hold the side of the source.`
      : `Regulator ${regulator} stands at its last tap.`,
  );
}

/**
 * The node and phase with the least room to the end of its range with the project, and the one furthest out of it among those
 * that are out already and made no worse; nothing where none is judged.
 */
function findExtremes(
  screening: Screening,
  { upstream }: OperatingCase,
  cases: VoltageCases,
): { own?: Extreme; standing?: Extreme } {
  const { model } = screening;
  const worst: { own?: Extreme; standing?: Extreme } = {};
  for (const load of flowLoads) {
    const flows = namedFlows(cases, load);
    for (const node of listJudgedNodes(model, upstream, flows.after)) {
      const { lowPu, highPu } = rangeAt(screening, nodeAt(model, node).kv);
      for (let phase = 0; phase < 3; phase++) {
        const volts = voltageAt(flows.after, node, phase);
        if (volts === null) continue;
        const before = voltageAt(flows.before, node, phase);
        const isHigh = volts - highPu > lowPu - volts;
        const beyond = isHigh ? volts - highPu : lowPu - volts;
        const kind = beyond > 0 && isNoWorse(volts, before, isHigh) ? 'standing' : 'own';
        const most = worst[kind]?.beyond ?? -Infinity;
        if (beyond <= most + 1e-9) continue;
        worst[kind] = { flow: flows.after, node, phase, load, volts, before, isHigh, beyond };
      }
    }
  }
  return worst;
}

/** Whether a voltage that is out of range is as far out of it without the project, but for rounding. */
function isNoWorse(volts: number, before: number | null, isHigh: boolean): boolean {
  if (before === null) return false;
  return isHigh ? volts <= before + 1e-6 : volts >= before - 1e-6;
}

function namedFlows(cases: VoltageCases, load: FlowLoad): { before: Flow; after: Flow } {
  const name = (when: 'before' | 'after'): VoltageCaseName => `${load}-${when}`;
  return { before: cases[name('before')], after: cases[name('after')] };
}
