import { describeFinding, fewestDecimals } from '../finding-words.ts';
import type { Finding } from '../schemas/findings.ts';
import type { Drawing, Mark } from './drawing.ts';
import { circle, hatch, line, path, text } from './drawing.ts';
import { drawLimitLine } from './limit-line.ts';

/* A finding on its limit line, with the geometry of the page's own, at one width for paper. */

const width = 600;
const margin = 14;
const at = (percent: number) => margin + (percent / 100) * (width - 2 * margin);
const anchorAt = (percent: number) => (percent < 26 ? 'start' : percent > 74 ? 'end' : 'middle');

type Geometry = ReturnType<typeof drawLimitLine>;

/** Nothing where there is no number or no limit to hold it against. */
export function drawFindingLine(finding: Finding): Drawing | undefined {
  const { value, limit, question, comparison, unit, before } = finding;
  if (value === null || limit === null) return undefined;
  const geometry = drawLimitLine({ value, limit, before, comparison, unit, decimals: fewestDecimals(unit) });
  const words = describeFinding(finding);
  return {
    title: question,
    description: geometry.sentence,
    width,
    height: geometry.beforeAt === null ? 72 : 90,
    marks: [...drawScale(geometry), ...drawMarks(geometry)],
    table: {
      columns: [
        { label: 'Measured', isFigure: true },
        { label: 'Before the project', isFigure: true },
        { label: 'Limit', isFigure: true },
        { label: 'Verdict', isFigure: false },
      ],
      rows: [[words.value, words.before ?? 'Not evaluated', words.limit, words.verdict]],
    },
  };
}

/** The ruled line, its break, and the field that does not meet the limit. */
function drawScale({ beyond, ticks, breakAt, limitAt, limitText }: Geometry): Mark[] {
  const marks = beyond ? hatch(at(beyond.from), 27, at(beyond.to) - at(beyond.from), 13) : [];
  marks.push(line(at(0), 40, at(100), 40));
  for (const tick of ticks) marks.push(line(at(tick), 35, at(tick), 40, 'thin'));
  if (breakAt !== null) {
    marks.push(line(at(breakAt) - 3, 47, at(breakAt), 33), line(at(breakAt) + 3, 47, at(breakAt) + 6, 33));
  }
  if (limitAt !== null) {
    marks.push(line(at(limitAt), 22, at(limitAt), 50, 'heavy'));
    marks.push(text(at(limitAt), 65, limitText ?? '', 'figure', anchorAt(limitAt)));
  }
  return marks;
}

/** A ring at the value before, a pointer at the value after. */
function drawMarks({ beforeAt, beforeText, valueAt, valueText, meets }: Geometry): Mark[] {
  const marks: Mark[] = [];
  if (beforeAt !== null) {
    marks.push(circle(at(beforeAt), 40, 4.5, 'body'));
    marks.push(text(at(beforeAt), 82, `before ${beforeText}`, 'figure', anchorAt(beforeAt)));
  }
  if (valueAt !== null) {
    const x = at(valueAt);
    const pointer = [
      [x, 38],
      [x - 6, 25],
      [x + 6, 25],
      [x, 38],
    ] as const;
    marks.push(path(pointer, meets === false ? 'madder-dot' : 'verdigris-dot'));
    marks.push(text(x, 16, valueText, 'figure', anchorAt(valueAt)));
  }
  return marks;
}
