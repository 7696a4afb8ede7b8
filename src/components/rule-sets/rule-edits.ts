import { clockKinds, type ClockKindKey } from '../../../shared/rules/clock-kinds.ts';
import { getClockRule, getSetAside } from '../../../shared/rules/rule-terms.ts';
import type {
  ClockEdit,
  FastTrackEdit,
  RuleEdit,
  RuleSetEdit,
} from '../../../shared/schemas/rule-set-edits.ts';
import type { RuleSetView } from '../../../shared/schemas/rule-set-views.ts';
import type { Fee, Rule, RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { listAreaQuestions, type AreaKey } from '../../../shared/rule-areas.ts';

/* Between what a rule set says and what stands in the form: copies, so that leaving without saving changes nothing. */

const copy = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T;

function toRuleEdit({ unit: _unit, ...rule }: Rule, asked: boolean): RuleEdit {
  return copy({ ...rule, asked, setAside: getSetAside(rule) });
}

/** The rules of one page by question: those that are asked, and those that could be. */
export function readRules({ content, available }: RuleSetView, area: AreaKey): Record<string, RuleEdit> {
  const entries = listAreaQuestions(area).flatMap(({ id }): [string, RuleEdit][] => {
    const asked = content.rules[id];
    const rule = asked ?? available[id];
    return rule === undefined ? [] : [[id, toRuleEdit(rule, asked !== undefined)]];
  });
  return Object.fromEntries(entries);
}

export function readClocks(content: RuleSet): Record<string, ClockEdit> {
  const kinds = Object.keys(clockKinds) as ClockKindKey[];
  return Object.fromEntries(kinds.map((kind) => [kind, copy(getClockRule(content, kind))]));
}

export function readFastTrack({ fastTrack }: RuleSet): FastTrackEdit | undefined {
  return fastTrack === undefined ? undefined : copy(fastTrack);
}

/** Each row ends where the next begins; only its beginning is typed. What could not be read is named there. */
export function writeFastTrack(fastTrack: FastTrackEdit): FastTrackEdit {
  const rows = fastTrack.rows.map((row, index) => {
    const next: unknown = fastTrack.rows[index + 1]?.fromKv;
    return { ...row, belowKv: typeof next === 'number' ? next : null };
  });
  return { ...fastTrack, rows };
}

/** A charge as people write it: in the currency's whole unit. */
export type TypedFee = Omit<Fee, 'baseCents' | 'perKwCents'> & {
  base: number | string | undefined;
  perKw: number | string | undefined;
};

export function readFees(content: RuleSet): TypedFee[] {
  return (content.fees ?? []).map(({ baseCents, perKwCents, ...fee }) => ({
    ...fee,
    base: baseCents / 100,
    perKw: perKwCents / 100,
  }));
}

/** 0.29 × 100 is 28.999…: a number of whole cents comes back whole, anything else stays what it is and is refused. */
function toCents(amount: number | string | undefined): unknown {
  if (typeof amount !== 'number') return amount;
  const cents = Math.round(amount * 100);
  return Math.abs(cents - amount * 100) < 1e-6 ? cents : amount * 100;
}

export function writeFees(fees: readonly TypedFee[]): RuleSetEdit['fees'] {
  const written = fees.map(({ base, perKw, ...fee }) => ({
    ...fee,
    baseCents: toCents(base),
    perKwCents: toCents(perKw ?? 0),
  }));
  return written as RuleSetEdit['fees'];
}
