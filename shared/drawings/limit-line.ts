import { decimalsToTellApart, formatQuantity } from '../format.ts';

export type Comparison = '<=' | '<' | '>=' | '>';

interface LimitLineInput {
  value: number | null;
  before?: number | null;
  limit: number | null;
  comparison: Comparison;
  unit: string;
  /** Fewest decimals; more are used until value and limit print differently. */
  decimals?: number;
}

interface LimitLineDrawing {
  /** Places along the line in percent of its width. */
  valueAt: number | null;
  beforeAt: number | null;
  limitAt: number | null;
  /** Where the line is broken because a mark lies far beyond; null for a true scale. */
  breakAt: number | null;
  ticks: number[];
  /** The side that does not meet the limit, percent from and to. */
  beyond: { from: number; to: number } | null;
  meets: boolean | null;
  valueText: string;
  beforeText: string | null;
  limitText: string | null;
  sentence: string;
}

const wordsFor: Record<Comparison, string> = {
  '<=': 'at most',
  '<': 'less than',
  '>=': 'at least',
  '>': 'more than',
};

/** A line longer than this many times its anchor is broken, or the marks at its left could not be told apart. */
const longestScale = 3;
const brokenAt = 80;

function meetsLimit(value: number, limit: number, comparison: Comparison): boolean {
  if (comparison === '<=') return value <= limit;
  if (comparison === '<') return value < limit;
  if (comparison === '>=') return value >= limit;
  return value > limit;
}

/** The step 1, 2 or 5 times a power of ten that divides `span` into at most `most` parts. */
function niceStep(span: number, most: number): number {
  const raw = span / most;
  const power = 10 ** Math.floor(Math.log10(raw));
  const factor = [1, 2, 5, 10].find((candidate) => candidate * power >= raw) ?? 10;
  return factor * power;
}

interface Scale {
  place: (amount: number) => number;
  breakAt: number | null;
  ticks: number[];
}

/** Amounts to percent. What the limit anchors is drawn true; marks beyond the break only keep their order. */
function makeScale(amounts: number[], anchor: number): Scale {
  const low = Math.min(0, ...amounts);
  const high = Math.max(...amounts);
  const far = anchor > 0 && high > longestScale * anchor;
  const inScale = far ? amounts.filter((amount) => amount <= longestScale * anchor) : amounts;
  const top = far ? Math.max(...inScale) * 1.5 : high + (high - low) * 0.18;
  const span = top - low || 1;
  const width = far ? brokenAt - 4 : 100;
  const step = niceStep(span, 10);
  const ticks: number[] = [];
  for (let index = Math.ceil(low / step); index * step <= low + span; index += 1) {
    ticks.push(((index * step - low) / span) * width);
  }
  const beyond = [...new Set(amounts.filter((amount) => far && amount > longestScale * anchor))].sort(
    (first, second) => first - second,
  );
  const place = (amount: number) => {
    const rank = beyond.indexOf(amount);
    if (rank < 0) return ((amount - low) / span) * width;
    return beyond.length === 1 ? 92 : 88 + rank * (8 / (beyond.length - 1));
  };
  return { place, breakAt: far ? brokenAt : null, ticks };
}

const isNumber = (amount: number | null | undefined): amount is number =>
  typeof amount === 'number' && Number.isFinite(amount);

function beyondSide(limitAt: number, comparison: Comparison) {
  return comparison === '<=' || comparison === '<' ? { from: limitAt, to: 100 } : { from: 0, to: limitAt };
}

function decimalsOf({ value, before, limit, decimals = 1 }: LimitLineInput): number {
  if (!isNumber(limit)) return decimals;
  const marks = [value, before].filter(isNumber);
  return Math.max(decimals, ...marks.map((mark) => decimalsToTellApart(mark, limit, decimals)));
}

function describe(drawing: Omit<LimitLineDrawing, 'sentence'>): string {
  const { valueText, limitText, beforeText, meets, breakAt } = drawing;
  const verdict = meets === null ? '' : meets ? ', within the limit' : ', outside the limit';
  const parts = [
    limitText ? `${valueText} against ${limitText}${verdict}.` : `${valueText}; no limit is set.`,
    beforeText ? `Before the project: ${beforeText}.` : '',
    breakAt === null ? '' : 'The line is broken; marks past the break are not to scale.',
  ];
  return parts.filter((part) => part !== '').join(' ');
}

/** Everything the drawing needs, and the sentence that says the same to whoever does not see it. */
export function drawLimitLine(input: LimitLineInput): LimitLineDrawing {
  const { value, limit, comparison, unit } = input;
  const before = input.before ?? null;
  const amounts = [value, before, limit].filter(isNumber);
  const scale = makeScale(amounts.length > 0 ? amounts : [1], limit ?? 0);
  const at = (amount: number | null) => (isNumber(amount) ? scale.place(amount) : null);
  const text = (amount: number | null) => formatQuantity(amount, unit, decimalsOf(input));
  const limitAt = at(limit);
  const drawing = {
    valueAt: at(value),
    beforeAt: at(before),
    limitAt,
    breakAt: scale.breakAt,
    ticks: scale.ticks,
    beyond: limitAt === null ? null : beyondSide(limitAt, comparison),
    meets: isNumber(value) && isNumber(limit) ? meetsLimit(value, limit, comparison) : null,
    valueText: text(value),
    beforeText: isNumber(before) ? text(before) : null,
    limitText: isNumber(limit) ? `${wordsFor[comparison]} ${text(limit)}` : null,
  };
  return { ...drawing, sentence: describe(drawing) };
}
