import { formatNumber } from '../format.ts';
import type { Look, Mark } from './drawing.ts';
import { line, path, text } from './drawing.ts';

/* Axes and lines of a chart, plain or with powers of ten. */

export const chartSize = { width: 640, height: 340, left: 64, right: 132, top: 28, bottom: 44 };

type Axis = {
  from: number;
  to: number;
  ticks: number[];
  /** Between the powers of ten. */
  minorTicks?: number[];
  place: (value: number) => number;
  print: (value: number) => string;
};

/** The step 1, 2 or 5 times a power of ten that divides `span` into at most `most` parts. */
function niceStep(span: number, most: number): number {
  const power = 10 ** Math.floor(Math.log10(span / most));
  return power * ([1, 2, 5, 10].find((factor) => factor * power >= span / most) ?? 10);
}

/** An axis over amounts; `start` and `end` are its places in pixels. */
export function plainAxis(low: number, high: number, start: number, end: number): Axis {
  const span = high > low ? high - low : Math.abs(high) || 1;
  const step = niceStep(span, 8);
  const from = Math.floor(low / step + 1e-9) * step;
  const to = Math.ceil((low + span) / step - 1e-9) * step;
  const ticks: number[] = [];
  for (let index = 0; from + index * step <= to + step / 2; index += 1) ticks.push(from + index * step);
  const decimals = Math.min(6, Math.max(0, -Math.floor(Math.log10(step) + 1e-9)));
  return {
    from,
    to,
    ticks,
    place: (value) => start + ((value - from) / (to - from)) * (end - start),
    print: (value) => formatNumber(value, decimals),
  };
}

/** An axis of powers of ten over positive amounts. */
export function powerAxis(low: number, high: number, start: number, end: number): Axis {
  const first = Math.floor(Math.log10(low));
  const last = Math.max(first + 1, Math.ceil(Math.log10(high)));
  const ticks = Array.from({ length: last - first + 1 }, (_, index) => 10 ** (first + index));
  const place = (value: number) => start + ((Math.log10(value) - first) / (last - first)) * (end - start);
  const minorTicks = ticks.slice(0, -1).flatMap((tick) => [2, 3, 4, 5, 6, 7, 8, 9].map((n) => n * tick));
  const print = (value: number) => formatNumber(value, Math.max(0, -Math.round(Math.log10(value))));
  return { from: 10 ** first, to: 10 ** last, ticks, minorTicks, place, print };
}

/** Frame, grid, ticks and the names of both axes. */
export function drawAxes(x: Axis, y: Axis, names: { x: string; y: string }): Mark[] {
  const { width, height, left, right, top, bottom } = chartSize;
  const marks: Mark[] = [];
  for (const tick of y.ticks) {
    const at = y.place(tick);
    marks.push(
      line(left, at, width - right, at, 'grid'),
      text(left - 8, at + 4, y.print(tick), 'figure', 'end'),
    );
  }
  for (const tick of y.minorTicks ?? []) {
    const at = y.place(tick);
    marks.push(line(left - 4, at, left, at, 'thin'));
  }
  for (const tick of x.minorTicks ?? []) {
    const at = x.place(tick);
    marks.push(line(at, height - bottom, at, height - bottom + 3, 'thin'));
  }
  for (const tick of x.ticks) {
    const at = x.place(tick);
    if (x.minorTicks) marks.push(line(at, top, at, height - bottom, 'grid'));
    marks.push(line(at, height - bottom, at, height - bottom + 5));
    marks.push(text(at, height - bottom + 19, x.print(tick), 'figure', 'middle'));
  }
  marks.push(line(left, height - bottom, width - right, height - bottom));
  marks.push(line(left, top, left, height - bottom));
  marks.push(text(left - 8, 14, names.y, 'soft'));
  marks.push(text(width - right, height - 8, names.x, 'soft', 'end'));
  return marks;
}

export type Series = { name: string; look: Look; points: readonly (readonly [number, number])[] };

/** Lines with their names to the right, kept from lying on each other. */
export function drawSeries(x: Axis, y: Axis, series: readonly Series[]): Mark[] {
  const drawn = series.filter(({ points }) => points.length > 0);
  const marks = drawn.map(({ points, look }) =>
    path(
      points.map(([px, py]) => [x.place(px), y.place(py)] as const),
      look,
    ),
  );
  const labels = drawn
    .map(({ name, look, points }) => ({ name, look, y: y.place(points.at(-1)![1]) }))
    .sort((p, q) => p.y - q.y);
  let lowest = -Infinity;
  for (const label of labels) {
    lowest = Math.max(label.y, lowest + 16);
    const right = chartSize.width - chartSize.right;
    marks.push(line(right + 4, lowest, right + 22, lowest, label.look));
    marks.push(text(right + 26, lowest + 4, label.name, 'soft'));
  }
  return marks;
}
