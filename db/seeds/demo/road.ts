import { at, smooth, stationsKm, type Point } from './plane.ts';

export interface Road {
  name: string;
  rank: 'trunk' | 'road' | 'lane';
  line: Point[];
  stations: number[];
  /** Distance along the road at which it passes a named junction. */
  marks: Map<string, number>;
  /** The road that a lane turns off from, and where. */
  host: { road: string; atKm: number } | null;
}

/** A road through points; those with a name can be asked for by it afterwards. */
export function drawRoad(
  name: string,
  rank: Road['rank'],
  via: readonly { name: string | null; point: Point }[],
): Road {
  const steps = 8;
  const line = smooth(
    via.map((stop) => stop.point),
    steps,
  );
  const stations = stationsKm(line);
  const marks = new Map<string, number>();
  via.forEach((stop, i) => {
    if (stop.name !== null) marks.set(stop.name, at(stations, i * steps));
  });
  return { name, rank, line, stations, marks, host: null };
}

export function lengthKm(road: Road): number {
  return at(road.stations, -1);
}
