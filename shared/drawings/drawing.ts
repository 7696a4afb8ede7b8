/*
 * A drawing as plain marks, the same for the page, the document and the picture file: what is drawn is decided here, once.
 * Lengths are pixels at 96 to the inch; colours are those of the surveyor's sheet and read black on white.
 */

export const looks = {
  /** What is there: lines of the feeder, frames, axes. */
  ink: { stroke: '#221f1a', 'stroke-width': 1.5, fill: 'none' },
  heavy: { stroke: '#221f1a', 'stroke-width': 2.5, fill: 'none' },
  thin: { stroke: '#837654', 'stroke-width': 0.75, fill: 'none' },
  grid: { stroke: '#cfc2a3', 'stroke-width': 0.75, fill: 'none' },
  body: { stroke: '#221f1a', 'stroke-width': 1.5, fill: '#ffffff' },
  dot: { stroke: 'none', fill: '#221f1a' },
  /** The project, or the state with it. */
  copper: { stroke: '#964617', 'stroke-width': 2, fill: 'none' },
  'copper-dashed': { stroke: '#964617', 'stroke-width': 1.5, 'stroke-dasharray': '2 3', fill: 'none' },
  'copper-body': { stroke: '#964617', 'stroke-width': 1.5, fill: '#ffffff' },
  'copper-dot': { stroke: 'none', fill: '#964617' },
  dashed: { stroke: '#221f1a', 'stroke-width': 1.5, 'stroke-dasharray': '6 4', fill: 'none' },
  dotted: { stroke: '#221f1a', 'stroke-width': 1.5, 'stroke-dasharray': '2 3', fill: 'none' },
  /** What is connected and meets its limit; what does not. */
  verdigris: { stroke: '#27665a', 'stroke-width': 2, fill: 'none' },
  'verdigris-dot': { stroke: 'none', fill: '#27665a' },
  'madder-dot': { stroke: 'none', fill: '#90241d' },
  text: { fill: '#221f1a', 'font-family': 'IBM Plex Sans', 'font-size': 12 },
  soft: { fill: '#595146', 'font-family': 'IBM Plex Sans', 'font-size': 11 },
  figure: { fill: '#221f1a', 'font-family': 'IBM Plex Mono', 'font-size': 11 },
  'copper-text': { fill: '#6f3210', 'font-family': 'IBM Plex Sans', 'font-size': 12 },
} as const satisfies Record<string, Record<string, string | number>>;

export type Look = keyof typeof looks;

/** One mark: a tag of SVG with its places. */
export type Mark = {
  tag: 'line' | 'path' | 'rect' | 'circle' | 'text';
  look: Look;
  at: Record<string, string | number>;
  text?: string;
};

/** The same numbers as a table, for whoever reads rather than looks. */
export type DrawingTable = { columns: { label: string; isFigure: boolean }[]; rows: string[][] };

export type Drawing = {
  title: string;
  /** What it shows, in one or two sentences. */
  description: string;
  width: number;
  height: number;
  marks: Mark[];
  table: DrawingTable;
};

/** Tenths of a pixel are enough, and the same everywhere. */
function round(place: number): number {
  return Math.round(place * 10) / 10;
}

export function line(x1: number, y1: number, x2: number, y2: number, look: Look = 'ink'): Mark {
  return { tag: 'line', look, at: { x1: round(x1), y1: round(y1), x2: round(x2), y2: round(y2) } };
}

export function rect(x: number, y: number, width: number, height: number, look: Look = 'body'): Mark {
  return {
    tag: 'rect',
    look,
    at: { x: round(x), y: round(y), width: round(width), height: round(height) },
  };
}

export function circle(cx: number, cy: number, r: number, look: Look = 'body'): Mark {
  return { tag: 'circle', look, at: { cx: round(cx), cy: round(cy), r } };
}

export function path(points: readonly (readonly [number, number])[], look: Look = 'ink'): Mark {
  const d = points.map(([x, y], index) => `${index === 0 ? 'M' : 'L'}${round(x)} ${round(y)}`).join('');
  return { tag: 'path', look, at: { d } };
}

export function text(
  x: number,
  y: number,
  words: string,
  look: Look = 'text',
  anchor: 'start' | 'middle' | 'end' = 'start',
): Mark {
  return { tag: 'text', look, at: { x: round(x), y: round(y), 'text-anchor': anchor }, text: words };
}

/** Slanted lines across a field: what lies outside a limit. */
export function hatch(x: number, y: number, width: number, height: number): Mark[] {
  const marks: Mark[] = [];
  for (let start = -height; start < width; start += 7) {
    const from = Math.max(0, start);
    const to = Math.min(width, start + height);
    if (to > from)
      marks.push(line(x + from, y + height - (from - start), x + to, y + height - (to - start), 'thin'));
  }
  return marks;
}

const escapes: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };

export function escapeMarkup(words: string): string {
  return words.replace(/[&<>"]/g, (sign) => escapes[sign]!);
}

/** A picture file, or part of a document; `id` keeps its names apart from those of others. */
export function writeSvg({ title, description, width, height, marks }: Drawing, id: string): string {
  const attributes = (given: Record<string, string | number>) =>
    Object.entries(given)
      .map(([name, value]) => ` ${name}="${escapeMarkup(String(value))}"`)
      .join('');
  const drawn = marks.map(({ tag, look, at, text: words }) => {
    const body = words === undefined ? '/>' : `>${escapeMarkup(words)}</${tag}>`;
    return `<${tag}${attributes({ ...at, ...looks[look] })}${body}`;
  });
  const head = `xmlns="http://www.w3.org/2000/svg" role="img" aria-labelledby="${id}-title ${id}-desc"`;
  return [
    `<svg ${head} width="${width}" height="${height}" viewBox="0 0 ${width} ${height}">`,
    `<title id="${id}-title">${escapeMarkup(title)}</title>`,
    `<desc id="${id}-desc">${escapeMarkup(description)}</desc>`,
    ...drawn,
    '</svg>',
  ].join('\n');
}
