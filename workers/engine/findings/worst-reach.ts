import type { Rule } from '../../../shared/schemas/rule-sets.ts';
import { nodeAt } from '../model-parts.ts';
import type { Reach } from './reach.ts';
import { measureReach, pickupOf } from './reach.ts';
import type { Screening } from './screening.ts';

/* Of all that is measured, what decides: one measurement for each thing that a rule asks of reach. */

/** The measurement that decides, its value, the limit that it is held against, and the worst value without the project. */
export type Worst = { reach: Reach; value: number; limit: number; before: number | null };

export type WorstReach = {
  /** Multiples of pickup: bolted line to ground, line to ground through the resistance, line to line. */
  readonly bolted?: Worst;
  readonly resistive?: Worst;
  /** By how much the project lowers 3I0 in the device, in percent of it. */
  readonly fall?: Worst;
  readonly phase?: Worst;
};

const known = new WeakMap<Screening, WorstReach>();

/** Measures once what the questions of ground and phase reach share. */
export function findWorstReach(screening: Screening): WorstReach {
  let worst = known.get(screening);
  if (!worst) known.set(screening, (worst = measureWorst(screening)));
  return worst;
}

function measureWorst(screening: Screening): WorstReach {
  const { 'ground-reach': ground, 'phase-reach': phase } = screening.ruleSet.rules;
  const bolted = keepWorst();
  const resistive = keepWorst();
  const fall = keepWorst();
  const lineLine = keepWorst();
  const faultOhm = screening.study.minimumFaultOhm ?? 0;
  const kvOf = (reach: Reach) => nodeAt(screening.model, reach.zone.node).kv;
  const keepGround = (rule: Rule) => (reach: Reach) => {
    const kv = kvOf(reach);
    const isBolted = reach.after.faultOhm === 0;
    const multiple = overPickup(reach.after.amps, 'ground', reach)!;
    const before = overPickup(reach.leastBefore, 'ground', reach);
    if (isBolted) bolted.keep(reach, multiple, limitAt(rule, 'multiple', kv), before, 'least');
    if (!isBolted || faultOhm === 0) {
      resistive.keep(reach, multiple, limitAt(rule, 'resistiveMultiple', kv), before, 'least');
    }
    if (!reach.before || reach.before.amps < leastAmps) return;
    const percent = (1 - reach.after.amps / reach.before.amps) * 100;
    fall.keep(reach, percent, limitAt(rule, 'largestFallPercent', kv), undefined, 'most');
  };
  const keepPhase = (rule: Rule) => (reach: Reach) => {
    const before = overPickup(reach.leastBefore, 'phase', reach);
    const limit = limitAt(rule, 'multiple', kvOf(reach));
    lineLine.keep(reach, overPickup(reach.after.amps, 'phase', reach)!, limit, before, 'least');
  };
  const faultOhms = faultOhm === 0 ? [0] : [0, faultOhm];
  measureReach(screening, [
    ...(ground ? [{ kind: 'ground' as const, rule: ground, faultOhms, keep: keepGround(ground) }] : []),
    ...(phase ? [{ kind: 'phase' as const, rule: phase, faultOhms: [0], keep: keepPhase(phase) }] : []),
  ]);
  return { bolted: bolted.worst, resistive: resistive.worst, fall: fall.worst, phase: lineLine.worst };
}

/** What is less than that in a device is rounding of nothing, of which no fall can be told. */
const leastAmps = 1e-6;

function overPickup(amps: number | undefined, kind: 'phase' | 'ground', { zone }: Reach): number | undefined {
  return amps === undefined ? undefined : amps / pickupOf(zone.device, kind)!;
}

/** What is more only by rounding is not worse, so that the first of equals is named. */
const rounding = 1e-9;

function keepWorst() {
  let worst: Worst | undefined;
  let worstBefore: number | null = null;
  return {
    /** `worse` says whether the least or the most counts; a limit differs by voltage, so that the margin to it decides. */
    keep(
      reach: Reach,
      value: number,
      limit: number | undefined,
      before: number | undefined,
      worse: 'least' | 'most',
    ) {
      if (limit === undefined) return;
      const sign = worse === 'least' ? 1 : -1;
      const marginOf = (of: number, to: number) => sign * (worse === 'least' ? of / to : of - to);
      if (before !== undefined && (worstBefore === null || before < worstBefore)) worstBefore = before;
      if (worst && marginOf(value, limit) >= marginOf(worst.value, worst.limit) - rounding) return;
      worst = { reach, value, limit, before: null };
    },
    get worst(): Worst | undefined {
      return worst && { ...worst, before: worstBefore };
    },
  };
}

/**
 * Gives a limit of a rule at a voltage: the parameter of this name with "Above15Kv" at its end where the voltage is above
 * 15 kV, of which the highest that applies counts; else the parameter of this name, for `multiple` the rule's own limit.
 */
export function limitAt(rule: Rule, name: string, kv: number): number | undefined {
  const pattern = new RegExp(`^${name}Above([0-9.]+)Kv$`);
  let best = { aboveKv: -1, limit: name === 'multiple' ? rule.limits[0].limit : rule.parameters?.[name] };
  for (const [key, limit] of Object.entries(rule.parameters ?? {})) {
    const aboveKv = Number(pattern.exec(key)?.[1] ?? NaN);
    if (kv > aboveKv && aboveKv > best.aboveKv) best = { aboveKv, limit };
  }
  return typeof best.limit === 'number' ? best.limit : undefined;
}
