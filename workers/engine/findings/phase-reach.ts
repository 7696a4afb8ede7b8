import { describeCase, listUnanswerable, placeOf, withoutProject } from './ground-reach.ts';
import type { Answered } from './judge.ts';
import { judge, ruleOf } from './judge.ts';
import { pickupOf } from './reach.ts';
import { workMultiple } from './reach-working.ts';
import type { Screening } from './screening.ts';
import { findWorstReach } from './worst-reach.ts';

/**
 * Does phase protection still reach the end of its zone?
 * The largest phase current in the device for a bolted line-to-line fault, over its phase pickup, at every end of its
 * zone that has two phases, in the cases of ground reach. Rule: the limit, or `multipleAbove15Kv` and the like by
 * voltage; `fusesBoundZones` lets a zone end at a fuse.
 */
export function answerPhaseReach(screening: Screening): Answered[] {
  const open = listUnanswerable(screening, 'phase');
  const { phase } = open.isFinal ? {} : findWorstReach(screening);
  if (!phase) return open.answers;
  const { reach, value, limit, before } = phase;
  const { device } = reach.zone;
  const place = placeOf(screening, reach);
  const notes = [
    `${reach.after.amps.toFixed(0)} A in ${device.id} against a pickup of ${pickupOf(device, 'phase')} A, for a ` +
      `line-to-line fault at ${place}${withoutProject(reach)}.`,
    ...describeCase(screening, reach),
  ];
  const rule = ruleOf(screening, 'phase-reach');
  const limits = [{ ...rule.limits[0], limit }];
  const rules = {
    ...screening.ruleSet.rules,
    'phase-reach': { ...rule, limits: limits as typeof rule.limits },
  };
  return [
    judge({ ...screening, ruleSet: { ...screening.ruleSet, rules } }, 'phase-reach', {
      element: `${device.id} to ${place}`,
      value,
      before,
      note: notes.join(' '),
      working: workMultiple(screening, reach, 'phase'),
    }),
    ...open.answers,
  ];
}
