import type { Comparison } from '../../../shared/schemas/findings.ts';
import { nodeAt } from '../model-parts.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Reach } from './reach.ts';
import { pickupOf, zonesIn } from './reach.ts';
import { workFall, workMultiple } from './reach-working.ts';
import type { Screening } from './screening.ts';
import type { Worst } from './worst-reach.ts';
import { describeWeakest } from './weakest-source.ts';
import { findWorstReach } from './worst-reach.ts';

const id = 'ground-reach';

/**
 * Does ground protection still see the end of its zone?
 * Residual current 3I0 in the device, over its ground pickup, at every end of its zone with the weakest source: bolted, and
 * through `minimumFaultOhm`; and by how much the project lowers 3I0. A ground source beside the substation's takes a share
 * of the zero sequence: the current of the fault rises while that in the relay falls.
 * Rule: the limit of bolted faults, or `multipleAbove15Kv` and the like by voltage; `resistiveMultiple` and
 * `largestFallPercent`, with the same endings;
 * `fusesBoundZones` lets a zone end at a fuse.
 */
export function answerGroundReach(screening: Screening): Answered[] {
  const open = listUnanswerable(screening, 'ground');
  if (open.isFinal) return open.answers;
  const { bolted, resistive, fall } = findWorstReach(screening);
  return [
    ...(bolted ? [judgeMultiple(screening, bolted, 'bolted')] : []),
    ...(resistive ? [judgeMultiple(screening, resistive, throughOhms(screening))] : []),
    ...(fall ? [judgeFall(screening, fall)] : []),
    ...open.answers,
  ];
}

function throughOhms({ study }: Screening): string {
  return `through ${study.minimumFaultOhm ?? 0} ohm`;
}

function judgeMultiple(
  screening: Screening,
  { reach, value, limit, before }: Worst,
  fault: string,
): Answered {
  const notes = [
    `${reach.after.amps.toFixed(0)} A of 3I0 in ${reach.zone.device.id} against a pickup of ` +
      `${pickupOf(reach.zone.device, 'ground')} A, for a line-to-ground fault at ${placeOf(screening, reach)}, ${fault}` +
      `${withoutProject(reach)}.`,
    ...describeCase(screening, reach),
  ];
  if (fault === 'through 0 ohm')
    notes.push('The model names no resistance for faults to ground, so none is taken.');
  return judge(withLimit(screening, '>=', limit, ''), id, {
    element: `${reach.zone.device.id} to ${placeOf(screening, reach)}, ${fault}`,
    value,
    before,
    note: notes.join(' '),
    working: workMultiple(screening, reach, 'ground'),
  });
}

function judgeFall(screening: Screening, { reach, value, limit }: Worst): Answered {
  const fault = reach.after.faultOhm === 0 ? 'bolted' : throughOhms(screening);
  const total = (sight: Reach['after']) => Math.hypot(sight.fault.earth.re, sight.fault.earth.im);
  const change = (total(reach.after) / total(reach.before!) - 1) * 100;
  const notes = [
    `3I0 in ${reach.zone.device.id} goes from ${reach.before!.amps.toFixed(1)} A to ${reach.after.amps.toFixed(1)} A, ` +
      `while the current of the fault itself ${change < 0 ? 'falls' : 'rises'} by ${Math.abs(change).toFixed(1)} %.`,
    ...describeCase(screening, reach),
  ];
  return judge(withLimit(screening, '<=', limit, '%'), id, {
    element: `${reach.zone.device.id} to ${placeOf(screening, reach)}, fall of 3I0, ${fault}`,
    value,
    note: notes.join(' '),
    working: workFall(screening, reach),
  });
}

/** The screening with the rule held against another limit: a question of several parts has one rule. */
function withLimit(screening: Screening, comparison: Comparison, limit: number, unit: string): Screening {
  const rule = ruleOf(screening, id);
  const { consequence } = rule.limits[0];
  const rules = {
    ...screening.ruleSet.rules,
    [id]: { ...rule, unit, limits: [{ limit, comparison, consequence }] },
  };
  return { ...screening, ruleSet: { ...screening.ruleSet, rules: rules as Screening['ruleSet']['rules'] } };
}

export function placeOf({ model }: Screening, { node }: Pick<Reach, 'node'>): string {
  return nodeAt(model, node).id;
}

export function withoutProject({ before }: Reach): string {
  return before ? `; without the project ${before.amps.toFixed(0)} A` : '';
}

export function describeCase(screening: Screening, { deciding }: Reach): string[] {
  const words = deciding.words === '' ? '' : `: ${deciding.words}`;
  return [
    `Weakest source${words}.`,
    ...describeWeakest(screening),
    ...describeDeciding(screening.cases, deciding.operating),
  ];
}

/** What cannot be answered: for want of a source, of devices or of their pickups; final where nothing else can. */
export function listUnanswerable(
  screening: Screening,
  kind: 'phase' | 'ground',
): { answers: Answered[]; isFinal: boolean } {
  const question = kind === 'phase' ? 'phase-reach' : 'ground-reach';
  const say = (verdict: 'needs-data' | 'not-applicable', note: string, element?: string): Answered =>
    answer(screening, question, verdict, { note, ...(element !== undefined && { element }) });
  const final = (only: Answered) => ({ answers: [only], isFinal: true });
  if (kind === 'ground') {
    if (lacksAnyGroundSource(screening)) {
      return final(say('needs-data', 'A source gives no zero-sequence impedance, so that 3I0 is not known.'));
    }
    if (!hasZeroSequence(screening)) {
      const note =
        'Nothing is earthed here: a line-to-ground fault draws no current that a device could see.';
      return final(say('not-applicable', note));
    }
  }
  const rule = ruleOf(screening, question);
  const devices = new Map<string, boolean>();
  for (const operating of screening.cases) {
    const { zones, endsOf } = zonesIn(screening, operating, rule);
    for (const zone of zones) {
      if (endsOf(zone, kind).length > 0)
        devices.set(zone.device.id, pickupOf(zone.device, kind) !== undefined);
    }
  }
  if (devices.size === 0) {
    const note =
      'No breaker, recloser or relay is known between the sources and the point of interconnection.';
    return final(say('needs-data', note));
  }
  const missing = [...devices].filter(([, isKnown]) => !isKnown).map(([device]) => device);
  const answers = missing.map((device) => say('needs-data', `Its ${kind} pickup is not known.`, device));
  return { answers, isFinal: missing.length === devices.size };
}

function lacksAnyGroundSource({ study }: Screening): boolean {
  return (study.feeder.sources ?? []).some(({ max, min }) => !max.z0 || (min && !min.z0));
}

function hasZeroSequence({ states: { after }, poi }: Screening): boolean {
  const { busOf, laterals } = after.topology;
  const spot = laterals.spotOf[poi]!;
  const bus = spot === -1 ? busOf[poi]! : laterals.tap[spot]!;
  return bus === -1 || after.networks.zero.hasPath[bus] === 1;
}
