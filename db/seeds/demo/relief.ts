import { at, distanceToLineKm, type Point } from './plane.ts';
import type { Water } from './water.ts';

/** Hills of the vale: where, how high over the valley floor, how wide. */
export const hills: readonly { name: string; top: Point; metres: number; widthKm: number }[] = [
  { name: 'Wether Law', top: [9.2, 8.4], metres: 210, widthKm: 1.7 },
  { name: 'Corrie Fell', top: [-11.2, 9], metres: 280, widthKm: 2.3 },
  { name: 'Mere Rigg', top: [-7.2, 5.9], metres: 130, widthKm: 1.2 },
  { name: 'Ostrey Down', top: [-12.4, -6], metres: 170, widthKm: 2 },
  { name: 'Barrow Hill', top: [-7.9, -4.9], metres: 150, widthKm: 1.5 },
  { name: 'Broad Moor', top: [1.9, 3.9], metres: 120, widthKm: 1.5 },
  { name: 'Beacon Rigg', top: [11.6, 0.2], metres: 110, widthKm: 1.4 },
  { name: 'Saltern Heugh', top: [0.9, -9], metres: 90, widthKm: 1.3 },
];

const spacingKm = 0.32;
const columns = 84;
const rows = 64;
const levelsMetres = [25, 50, 75, 100, 125, 150, 175, 200, 225, 250];

function heightMetres(point: Point, water: Water): number {
  const shores = water.lakes.map((lake) => distanceToLineKm(point, [...lake.ring, at(lake.ring, 0)]));
  const banks = water.streams.map((stream) => distanceToLineKm(point, stream.line));
  const fromWaterKm = Math.min(...shores, ...banks);
  const rise = hills.reduce((sum, { top, metres, widthKm }) => {
    const [dx, dy] = [point[0] - top[0], point[1] - top[1]];
    return sum + metres * Math.exp(-(dx * dx + dy * dy) / (widthKm * widthKm));
  }, 0);
  const ripple = 5 * Math.sin(1.7 * point[0] + 0.6 * point[1]) * Math.cos(1.3 * point[1] - 0.4 * point[0]);
  return 15 * fromWaterKm ** 0.9 + rise * Math.min(1, fromWaterKm * 1.5) + ripple * Math.min(1, fromWaterKm);
}

type Cut = { key: string; point: Point };

/** Marching squares: joins the cuts of one level through each cell, then the cells into lines. */
function traceLevel(heights: readonly (readonly number[])[], level: number): Point[][] {
  const neighbours = new Map<string, { point: Point; to: string[] }>();
  const corner = (c: number, r: number) => ({ c, r, h: at(at(heights, r), c) });
  const place = (c: number, r: number): Point => [(c - columns / 2) * spacingKm, (r - rows / 2) * spacingKm];
  const cut = (a: ReturnType<typeof corner>, b: ReturnType<typeof corner>): Cut | null => {
    if (a.h >= level === b.h >= level) return null;
    const share = (level - a.h) / (b.h - a.h);
    return {
      key: `${a.c + b.c}/${a.r + b.r}`,
      point: place(a.c + (b.c - a.c) * share, a.r + (b.r - a.r) * share),
    };
  };
  const join = (from: Cut, to: Cut) => {
    const entry = neighbours.get(from.key) ?? { point: from.point, to: [] };
    entry.to.push(to.key);
    neighbours.set(from.key, entry);
  };
  for (let r = 0; r + 1 < rows; r += 1) {
    for (let c = 0; c + 1 < columns; c += 1) {
      const [a, b, d, e] = [corner(c, r), corner(c + 1, r), corner(c + 1, r + 1), corner(c, r + 1)];
      const cuts = [cut(a, b), cut(b, d), cut(d, e), cut(e, a)].filter((found) => found !== null);
      for (let i = 0; i + 1 < cuts.length; i += 2) {
        join(at(cuts, i), at(cuts, i + 1));
        join(at(cuts, i + 1), at(cuts, i));
      }
    }
  }
  return chain(neighbours);
}

/** Follows each line from an open end if it has one, else once around. */
function chain(neighbours: ReadonlyMap<string, { point: Point; to: string[] }>): Point[][] {
  const seen = new Set<string>();
  const lines: Point[][] = [];
  const starts = [...neighbours].sort(([, a], [, b]) => a.to.length - b.to.length).map(([key]) => key);
  for (const start of starts) {
    if (seen.has(start)) continue;
    const line: Point[] = [];
    let key: string | undefined = start;
    let last = start;
    while (key !== undefined) {
      seen.add(key);
      last = key;
      const here: { point: Point; to: string[] } | undefined = neighbours.get(key);
      if (here) line.push(here.point);
      key = here?.to.find((next) => !seen.has(next));
    }
    const isRing = line.length > 2 && neighbours.get(last)?.to.includes(start);
    if (isRing) line.push(at(line, 0));
    if (line.length > 5) lines.push(line);
  }
  return lines;
}

/** Contour lines by height in metres. */
export function makeContours(water: Water): { metres: number; lines: Point[][] }[] {
  const heights = Array.from({ length: rows }, (_, r) =>
    Array.from({ length: columns }, (_, c) =>
      heightMetres([(c - columns / 2) * spacingKm, (r - rows / 2) * spacingKm], water),
    ),
  );
  return levelsMetres.map((metres) => ({ metres, lines: traceLevel(heights, metres) }));
}
