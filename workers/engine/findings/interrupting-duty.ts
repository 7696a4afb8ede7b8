import type { Device, Project } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import { largestXr } from '../asymmetry.ts';
import { isInService } from '../case.ts';
import type { CountedFault } from '../device-asymmetry.ts';
import { findCountedFault } from '../device-asymmetry.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { findTestXr, isAsymmetrical } from '../rating-basis.ts';
import type { SolvedCase } from '../solve-case.ts';
import { withoutInverters } from '../solve-case.ts';
import type { DutyState } from '../state-solver.ts';
import { Working } from '../working.ts';
import { workDuty } from './duty-working.ts';
import { boundInverterRaise, findInverterRaise } from './inverter-raise.ts';
import type { Answered } from './judge.ts';
import { answer, findBrokenLimit, judge, ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';

/** A device as one of its ratings has it: `interruptingKa` is what it may be closed on where `isClosing` says so. */
export type Rated = Device & { interruptingKa: number; isClosing: boolean; ofProject: boolean };

/** The fault that counts most against a rating, inverter currents added, and that in percent of the rating. */
export type Loading = CountedFault & {
  percent: number;
  operating: OperatingCase;
  added: AddedCurrent | undefined;
};

/** Inverter currents added in magnitude: the current without them, and by what share they raise it. */
type AddedCurrent = { bareAmperes: number; raise: number };

/** Kinds that are closed on faults at most, and interrupt none. */
const neverInterrupts = new Set(['switch', 'elbow', 'disconnect', 'sectionalizer']);

/**
 * Does everything that interrupts faults keep its margin?
 * The whole fault current at each device over its rating, with the project, and without it where that is more; above the
 * X/R that the rating was tested at it counts for more than it is. Of all operating cases the worst counts. A switch or an
 * elbow is held against the current that it may be closed on, symmetrical. One finding for the worst device, one for each
 * further device outside, one for the customer's panel behind a transformer of the project's own, one for each device without
 * a rating, one for each whose rated voltage is too low.
 */
export function answerInterruptingDuty(screening: Screening): Answered[] {
  const { study, project } = screening;
  const devices = [...(study.feeder.devices ?? []), ...(project.devices ?? [])];
  const panels = judgeRated(screening, listRatings(listPanels(screening), true));
  if (devices.length === 0) {
    const note = 'The model names no device that interrupts faults.';
    return [answer(screening, 'interrupting-duty', 'needs-data', { note }), ...panels];
  }
  const [first, ...further] = judgeRated(
    screening,
    listRatings(study.feeder.devices, false).concat(listRatings(project.devices, true)),
  );
  return [
    ...(first ? [{ ...first, note: `${first.note}${describeUnrated(devices)}` }] : []),
    ...further,
    ...panels,
    ...devices.flatMap((device) => describeMissing(screening, device)),
    ...devices.flatMap((device) => judgeVoltage(screening, device)),
  ];
}

/** The customer's main panel, as what stands at the low side of each transformer of the project's own. */
function listPanels({ project, model }: Screening): Device[] {
  const { panelInterruptingKa: interruptingKa, transformers = [] } = project;
  if (interruptingKa === undefined) return [];
  return transformers.map(({ id: branch, from, to }): Device => {
    const [kvFrom, kvTo] = [from, to].map((id) => nodeAt(model, model.nodeIndex.get(id)!).kv);
    const end = kvFrom! < kvTo! ? 'from' : 'to';
    return { id: panelElement(project, branch), branch, end, kind: 'panel', interruptingKa };
  });
}

/** What the finding of a panel behind a transformer of the project's own is about. */
export function panelElement({ id, transformers = [] }: Project, transformer: string): string {
  return transformers.length === 1 ? `${id} (panel)` : `${id} (panel at ${transformer})`;
}

function listRatings(devices: readonly Device[] = [], ofProject: boolean): Rated[] {
  return devices.flatMap((device) => {
    const { interruptingKa, faultClosingKa } = device;
    const interrupting =
      interruptingKa === undefined ? [] : [{ ...device, interruptingKa, isClosing: false, ofProject }];
    if (faultClosingKa === undefined) return interrupting;
    // Tests of closing on a fault hold at any X/R here: their rating is compared as it is.
    const asClosed = { ratingBasis: undefined, kind: 'switch', testXr: largestXr };
    return [
      ...interrupting,
      { ...device, ...asClosed, interruptingKa: faultClosingKa, isClosing: true, ofProject },
    ];
  });
}

function describeMissing(screening: Screening, device: Device): Answered[] {
  const { id, kind, interruptingKa, faultClosingKa } = device;
  if (interruptingKa !== undefined) return [];
  const onlyCloses = neverInterrupts.has(kind.toLowerCase());
  if (onlyCloses && faultClosingKa !== undefined) return [];
  const note = `Its ${onlyCloses ? 'fault-closing' : 'interrupting'} rating is not known.`;
  return [answer(screening, 'interrupting-duty', 'needs-data', { element: id, note })];
}

/** How many devices could not be held against the voltage where they stand; the worst device's note says it. */
function describeUnrated(devices: readonly Device[]): string {
  const count = devices.filter(({ ratedKv }) => ratedKv === undefined).length;
  if (count === 0) return '';
  const how = count === 1 ? '1 device has' : `${count} devices have`;
  return ` ${how} no rated voltage on record, so that it is not judged.`;
}

/** Rated voltage against the nominal one where it stands; said only where it is too low. */
function judgeVoltage(screening: Screening, device: Device): Answered[] {
  const { kv } = endOf(screening.model, device);
  if (device.ratedKv === undefined || device.ratedKv >= kv) return [];
  const rule = ruleOf(screening, 'interrupting-duty');
  const working = new Working();
  const nominal = working.given('U', 'nominal voltage where it stands', kv, 'kV');
  const rated = working.given('U_r', `rated voltage of ${device.id}, from the model`, device.ratedKv, 'kV');
  const value = (kv / device.ratedKv) * 100;
  const result = { symbol: 'share', words: 'of its rated voltage', unit: '%' };
  working.compute(result, 'U/U_r*100', [nominal, rated], value);
  return [
    {
      ...answer(screening, 'interrupting-duty', 'outside', {
        element: `${device.id}, rated voltage`,
        note: `It is rated ${device.ratedKv} kV and stands at ${kv} kV nominal.`,
        working: working.steps,
      }),
      value,
      limit: 100,
      comparison: '<=',
      unit: '%',
      source: rule.source,
    },
  ];
}

/** How many devices have inverter currents added one by one; beyond that the bound of the sum stands for it. */
const mostExact = 64;

function judgeRated(screening: Screening, devices: readonly Rated[]): Answered[] {
  const rule = ruleOf(screening, 'interrupting-duty');
  const after = worstLoadings(screening, 'after');
  const before = worstLoadings(screening, 'before');
  const bounded = devices
    .map((device) => ({ device, bound: after.bound(device).percent }))
    .sort((p, q) => q.bound - p.bound);

  const findings: Answered[] = [];
  let worst = 0;
  for (const { device, bound } of bounded) {
    // From here on no device can be the worst or outside.
    if (findings.length > 0 && bound <= worst && !findBrokenLimit(rule, bound)) break;
    const measure = findings.length < mostExact ? ('exact' as const) : ('bound' as const);
    const loading = {
      after: after[measure](device),
      before: device.ofProject ? null : before[measure](device),
    };
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
): Answered {
  const element = device.isClosing ? `${device.id}, closing` : device.id;
  const decisive = before && before.percent > after.percent ? before : after;
  const notes = [
    `${decisive.amperes.toFixed(0)} A available against a ${device.isClosing ? 'fault-closing ' : ''}rating of ${device.interruptingKa} kA.`,
    ...describeAsymmetry(screening, device, decisive),
  ];
  notes.push(...describeDeciding(screening.cases, decisive.operating));
  if (decisive === before) notes.push('It is more without the project, and that decides.');
  if (screening.study.options?.motorLoad) notes.push('Motors in the load are counted.');
  if (measure === 'bound') notes.push('Inverter currents are counted at a bound of their sum.');
  const finding = judge(screening, 'interrupting-duty', {
    element,
    value: decisive.percent,
    before: before?.percent ?? null,
    note: notes.join(' '),
    working: workDuty(screening, device, decisive),
  });
  if (finding.verdict !== 'within' || !lacksGroundSource(screening)) return finding;
  const note = 'A source gives no zero-sequence impedance, so ground faults may be larger than computed.';
  return answer(screening, 'interrupting-duty', 'needs-data', { element, note });
}

function describeAsymmetry({ model, study }: Screening, device: Rated, { factor, xr }: Loading): string[] {
  if (device.isClosing) return ['The symmetrical current counts.'];
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
  const node = branchAt(model, model.branchIndex.get(device.branch)!)[device.end];
  return { node, kv: nodeAt(model, node).kv };
}

/** Measures a device in every operating case in which its branch is in service, and takes the worst. */
function worstLoadings(screening: Screening, state: DutyState) {
  const { model, cases } = screening;
  const loadings = cases.map((operating) => loadingsIn(model, operating, state));
  const worst = (device: Rated, kind: 'exact' | 'bound'): Loading => {
    const branch = branchAt(model, model.branchIndex.get(device.branch)!);
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
    const alone = ready.bare === duty.solved ? phasors : findCountedFault(duty, ready.bare, device);
    const magnitudes = { ...alone, amperes: alone.amperes * (1 + raise) };
    const isPhasors = phasors.amperes * phasors.factor > magnitudes.amperes * magnitudes.factor;
    const decisive = isPhasors ? phasors : magnitudes;
    const added = isPhasors || raise === 0 ? undefined : { bareAmperes: alone.amperes, raise };
    return {
      ...decisive,
      operating,
      added,
      percent: ((decisive.amperes * decisive.factor) / (device.interruptingKa * 1000)) * 100,
    };
  };
  return {
    exact: (device: Rated) => measure(device, 'exact'),
    bound: (device: Rated) => measure(device, 'bound'),
  };
}
