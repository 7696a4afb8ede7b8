import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import { isInService } from '../case.ts';
import type { CountedFault } from '../device-asymmetry.ts';
import { findCountedFault } from '../device-asymmetry.ts';
import { findTestXr, isAsymmetrical } from '../rating-basis.ts';
import type { SolvedCase } from '../solve-case.ts';
import { withoutInverters } from '../solve-case.ts';
import type { DutyState } from '../state-solver.ts';
import { boundInverterRaise, findInverterRaise } from './inverter-raise.ts';
import { answer, findBrokenLimit, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';

type Rated = Device & { interruptingKa: number };

/** The fault that counts most against a rating, inverter currents added, and that in percent of the rating. */
type Loading = CountedFault & { percent: number; operating: OperatingCase };

/**
 * Does everything that interrupts faults keep its margin?
 * The whole fault current at each device over its rating, with the project, and without it where that is more; above the
 * X/R that the rating was tested at it counts for more than it is. Of all operating cases the worst counts. One finding for the worst device, one for each further
 * device outside, one for each without a rating.
 */
export function answerInterruptingDuty(screening: Screening): Finding[] {
  const devices = [...(screening.study.feeder.devices ?? []), ...(screening.project.devices ?? [])];
  if (devices.length === 0) {
    const note = 'The model names no device that interrupts faults.';
    return [answer(screening, 'interrupting-duty', 'needs-data', { note })];
  }
  const rated = devices.filter((device): device is Rated => device.interruptingKa !== undefined);
  const unrated = devices.filter((device) => device.interruptingKa === undefined);
  return [
    ...judgeRated(screening, rated),
    ...unrated.map(({ id }) =>
      answer(screening, 'interrupting-duty', 'needs-data', {
        element: id,
        note: 'Its interrupting rating is not known.',
      }),
    ),
  ];
}

/** How many devices have inverter currents added one by one; beyond that the bound of the sum stands for it. */
const mostExact = 64;

function judgeRated(screening: Screening, devices: readonly Rated[]): Finding[] {
  const rule = screening.ruleSet.rules['interrupting-duty'];
  const after = worstLoadings(screening, 'after');
  const before = worstLoadings(screening, 'before');
  const bounded = devices
    .map((device) => ({ device, bound: after.bound(device).percent }))
    .sort((p, q) => q.bound - p.bound);

  const findings: Finding[] = [];
  let worst = 0;
  for (const { device, bound } of bounded) {
    // From here on no device can be the worst or outside.
    if (findings.length > 0 && bound <= worst && !findBrokenLimit(rule, bound)) break;
    const measure = findings.length < mostExact ? ('exact' as const) : ('bound' as const);
    const isOfProject = screening.project.devices?.includes(device) ?? false;
    const loading = { after: after[measure](device), before: isOfProject ? null : before[measure](device) };
    const finding = judgeDevice(screening, device, loading, measure);
    worst = Math.max(worst, finding.value ?? 0);
    findings.push(finding);
  }
  findings.sort((p, q) => (q.value ?? 0) - (p.value ?? 0));
  return findings.filter((finding, place) => place === 0 || finding.verdict !== 'within');
}

function judgeDevice(
  screening: Screening,
  device: Rated,
  { after, before }: { after: Loading; before: Loading | null },
  measure: 'exact' | 'bound',
): Finding {
  const decisive = before && before.percent > after.percent ? before : after;
  const notes = [
    `${decisive.amperes.toFixed(0)} A available against a rating of ${device.interruptingKa} kA.`,
    ...describeAsymmetry(screening, device, decisive),
  ];
  notes.push(...describeDeciding(screening.cases, decisive.operating));
  if (decisive === before) notes.push('It is more without the project, and that decides.');
  if (screening.study.options?.motorLoad) notes.push('Motors in the load are counted.');
  if (measure === 'bound') notes.push('Inverter currents are counted at a bound of their sum.');
  const finding = judge(screening, 'interrupting-duty', {
    element: device.id,
    value: decisive.percent,
    before: before?.percent ?? null,
    note: notes.join(' '),
  });
  if (finding.verdict !== 'within' || !lacksGroundSource(screening)) return finding;
  const note = 'A source gives no zero-sequence impedance, so ground faults may be larger than computed.';
  return answer(screening, 'interrupting-duty', 'needs-data', { element: device.id, note });
}

function describeAsymmetry({ model, study }: Screening, device: Rated, { factor, xr }: Loading): string[] {
  const times = factor.toFixed(3);
  const here = xr >= 1000 ? 'X/R over 1000' : `X/R ${xr.toFixed(1)}`;
  if (isAsymmetrical(device)) {
    return [`The rating is asymmetrical: at ${here} the current counts ${times} times.`];
  }
  const { kv } = endOf(model, device);
  const test = findTestXr(device, { kv, frequencyHz: study.frequencyHz });
  const notes: string[] = [];
  if (!test.isGiven) {
    notes.push(`Its test X/R is not given: ${test.xr}, the lowest standard value for its kind, is taken.`);
  }
  if (factor > 1) {
    notes.push(`${here} is above the test X/R of ${test.xr}: the current counts ${times} times.`);
  }
  return notes;
}

function endOf(model: Model, device: Device) {
  const node = model.branches[model.branchIndex.get(device.branch)!]![device.end];
  return { node, kv: model.nodes[node]!.kv };
}

/** Measures a device in every operating case in which its branch is in service, and takes the worst. */
function worstLoadings(screening: Screening, state: DutyState) {
  const { model, cases } = screening;
  const loadings = cases.map((operating) => loadingsIn(model, operating, state));
  const worst = (device: Rated, kind: 'exact' | 'bound'): Loading => {
    const branch = model.branches[model.branchIndex.get(device.branch)!]!;
    const { kv } = endOf(model, device);
    return loadings
      .filter((_, place) => {
        if (place === 0) return true;
        const { choice } = cases[place]!.solver.solve(state, kv);
        return isInService(model, choice, branch);
      })
      .map((measure) => measure[kind](device))
      .reduce((p, q) => (q.percent > p.percent * (1 + 1e-9) ? q : p));
  };
  return {
    exact: (device: Rated) => worst(device, 'exact'),
    bound: (device: Rated) => worst(device, 'bound'),
  };
}

/**
 * Measures a device against its rating: the larger of the phasor result and the current without inverters with theirs
 * added in magnitude, or with a bound of those.
 */
function loadingsIn(model: Model, operating: OperatingCase, state: DutyState) {
  const prepared = new Map<SolvedCase, ReturnType<typeof prepare>>();
  const prepare = (solved: SolvedCase) => ({
    bare: withoutInverters(solved),
    boundRaise: boundInverterRaise(solved),
  });
  const measure = (device: Rated, kind: 'exact' | 'bound'): Loading => {
    const { node, kv } = endOf(model, device);
    const duty = operating.solver.solveDuty(state, kv);
    let ready = prepared.get(duty.solved);
    if (!ready) prepared.set(duty.solved, (ready = prepare(duty.solved)));
    const raise = kind === 'exact' ? findInverterRaise(duty.solved, node) : ready.boundRaise(node);
    const phasors = findCountedFault(duty, duty.solved, device);
    const alone = findCountedFault(duty, ready.bare, device);
    const magnitudes = { ...alone, amperes: alone.amperes * (1 + raise) };
    const decisive =
      phasors.amperes * phasors.factor > magnitudes.amperes * magnitudes.factor ? phasors : magnitudes;
    return {
      ...decisive,
      operating,
      percent: ((decisive.amperes * decisive.factor) / (device.interruptingKa * 1000)) * 100,
    };
  };
  return {
    exact: (device: Rated) => measure(device, 'exact'),
    bound: (device: Rated) => measure(device, 'bound'),
  };
}
