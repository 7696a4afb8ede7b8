/** A place on the sheet: kilometres east and north of the middle of Tessaly Vale. */
export type Point = readonly [eastKm: number, northKm: number];

/** The middle of the sheet, in open ocean: nobody lives within a thousand kilometres. */
const middle = { lat: -34.6, lng: -24.4 };
const kmPerDegreeNorth = 110.93;
const kmPerDegreeEast = 111.32 * Math.cos((middle.lat * Math.PI) / 180);

function round(value: number, decimals: number): number {
  const scale = 10 ** decimals;
  return Math.round(value * scale) / scale;
}

/** [lng, lat]; five decimals are one metre. */
export function toLngLat([eastKm, northKm]: Point, decimals = 5): [number, number] {
  return [
    round(middle.lng + eastKm / kmPerDegreeEast, decimals),
    round(middle.lat + northKm / kmPerDegreeNorth, decimals),
  ];
}

export function distanceKm(a: Point, b: Point): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1]);
}

export function at<T>(list: readonly T[], index: number): T {
  const item = list.at(index);
  if (item === undefined) throw new RangeError(`got index ${index}, expected one within ${list.length}`);
  return item;
}

/** Catmull-Rom curve through all points; the i-th of them comes out at index i × steps. */
export function smooth(points: readonly Point[], steps = 8): Point[] {
  const curve: Point[] = [];
  for (let i = 0; i + 1 < points.length; i += 1) {
    const [p0, p1, p2, p3] = [
      at(points, Math.max(0, i - 1)),
      at(points, i),
      at(points, i + 1),
      at(points, Math.min(points.length - 1, i + 2)),
    ];
    for (let step = 0; step < steps; step += 1) {
      const t = step / steps;
      const axis = (k: 0 | 1) =>
        0.5 *
        (2 * p1[k] +
          (p2[k] - p0[k]) * t +
          (2 * p0[k] - 5 * p1[k] + 4 * p2[k] - p3[k]) * t * t +
          (3 * p1[k] - p0[k] - 3 * p2[k] + p3[k]) * t * t * t);
      curve.push([axis(0), axis(1)]);
    }
  }
  curve.push(at(points, -1));
  return curve;
}

/** The same through a ring; the last point is not repeated. */
export function smoothRing(points: readonly Point[], steps = 6): Point[] {
  const n = points.length;
  const around = [at(points, n - 1), ...points, at(points, 0), at(points, 1)];
  return smooth(around, steps).slice(steps, steps + n * steps);
}

/** Distance along the line of each of its points. */
export function stationsKm(line: readonly Point[]): number[] {
  const stations = [0];
  for (let i = 1; i < line.length; i += 1) {
    stations.push(at(stations, -1) + distanceKm(at(line, i - 1), at(line, i)));
  }
  return stations;
}

interface Bearing {
  point: Point;
  /** Unit vector along the line. */
  along: Point;
}

/** Place and direction at a distance along the line; distances beyond its ends are taken as the ends. */
export function placeAt(line: readonly Point[], stations: readonly number[], km: number): Bearing {
  let i = 1;
  while (i < line.length - 1 && at(stations, i) < km) i += 1;
  const [a, b] = [at(line, i - 1), at(line, i)];
  const span = at(stations, i) - at(stations, i - 1);
  const share = Math.min(1, Math.max(0, (km - at(stations, i - 1)) / span));
  return {
    point: [a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share],
    along: [(b[0] - a[0]) / span, (b[1] - a[1]) / span],
  };
}

export function distanceToLineKm(point: Point, line: readonly Point[]): number {
  let nearest = Infinity;
  for (let i = 1; i < line.length; i += 1) {
    const [a, b] = [at(line, i - 1), at(line, i)];
    const [dx, dy] = [b[0] - a[0], b[1] - a[1]];
    const squared = dx * dx + dy * dy;
    const share = squared === 0 ? 0 : ((point[0] - a[0]) * dx + (point[1] - a[1]) * dy) / squared;
    const t = Math.min(1, Math.max(0, share));
    nearest = Math.min(nearest, Math.hypot(point[0] - a[0] - dx * t, point[1] - a[1] - dy * t));
  }
  return nearest;
}

/** Even-odd rule. */
export function isInside(point: Point, ring: readonly Point[]): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i, i += 1) {
    const [a, b] = [at(ring, i), at(ring, j)];
    const crosses = a[1] > point[1] !== b[1] > point[1];
    if (crosses && point[0] < ((b[0] - a[0]) * (point[1] - a[1])) / (b[1] - a[1]) + a[0]) inside = !inside;
  }
  return inside;
}

/** Douglas-Peucker: drops the points whose loss moves the line by less than the tolerance; the ends stay. */
export function simplify(line: readonly Point[], toleranceKm: number): Point[] {
  const keep = new Set([0, line.length - 1]);
  const spans: [number, number][] = [[0, line.length - 1]];
  for (let span = spans.pop(); span !== undefined; span = spans.pop()) {
    const [from, to] = span;
    let farthest = from;
    let farthestKm = toleranceKm;
    for (let i = from + 1; i < to; i += 1) {
      const km = distanceToLineKm(at(line, i), [at(line, from), at(line, to)]);
      if (km > farthestKm) [farthest, farthestKm] = [i, km];
    }
    if (farthest === from) continue;
    keep.add(farthest);
    spans.push([from, farthest], [farthest, to]);
  }
  return line.filter((_, i) => keep.has(i));
}
