import { distanceToLineKm, isInside, placeAt, smooth, smoothRing, stationsKm, type Point } from './plane.ts';

const tessaly: readonly Point[] = [
  [-6.9, 10.2],
  [-5.9, 9.2],
  [-5.1, 8.1],
  [-5.2, 6.9],
  [-4.7, 5.6],
  [-4.5, 4.4],
  [-3.5, 3.5],
  [-3.3, 2.4],
  [-2.5, 1.3],
  [-2.3, 0.1],
  [-1.4, -0.9],
  [-1.3, -1.9],
  [-0.3, -2.7],
  [0.9, -3.1],
  [2.3, -3.7],
  [3.9, -4.3],
  [5.1, -4.9],
  [5.97, -5.25],
];
const ostreyBrook: readonly Point[] = [
  [-13.2, -1.4],
  [-11.6, -1.9],
  [-10.3, -1.4],
  [-9, -1.9],
  [-7.4, -1.2],
  [-6.2, -1.1],
  [-5, 0.1],
  [-3.6, 0.2],
  [-2.35, 0.2],
];
const corrieBurn: readonly Point[] = [
  [9.8, 10.2],
  [9, 8.6],
  [7.2, 8],
  [6.2, 6],
  [6.6, 4.2],
  [6, 2.6],
  [6.9, 0.2],
  [6.3, -1.7],
  [6.9, -3.2],
  [6.7, -4.4],
  [6.9, -5.3],
];
const saltBeck: readonly Point[] = [
  [-4.9, -10.2],
  [-3, -9],
  [-1.8, -7.3],
  [0.3, -7.2],
  [2.2, -6.6],
  [3.6, -5.6],
  [4.4, -4.6],
];

/** Estuary and sea, one ring: the north shore from the east, then the south shore, then round the corner of the sheet. */
const shore: readonly Point[] = [
  [13.4, -4],
  [12.5, -4.5],
  [11.7, -4.4],
  [10.9, -5.2],
  [9.7, -5.2],
  [8.7, -5.6],
  [7.6, -5.1],
  [6.7, -5.15],
  [6.05, -5.1],
  [5.87, -5.43],
  [6.4, -5.75],
  [7.2, -6.3],
  [7.6, -7.2],
  [7, -7.8],
  [6.2, -8.1],
  [5.5, -8.9],
  [4.2, -9.1],
  [3.5, -9.7],
  [3.3, -10.2],
];
const seaCorner: readonly Point[] = [[13.4, -10.2]];
const gullHolm: readonly Point[] = [
  [9.2, -6.5],
  [9.6, -6.35],
  [9.95, -6.6],
  [9.8, -6.95],
  [9.3, -6.9],
];
const harrowMere: readonly Point[] = [
  [-5.2, 7],
  [-4.7, 6.7],
  [-4.3, 5.9],
  [-3.9, 5.2],
  [-4.2, 4.6],
  [-4.6, 4.2],
  [-5.1, 4.6],
  [-5, 5.3],
  [-5.5, 6],
  [-5.6, 6.6],
];
const tarn: readonly Point[] = [
  [-10.9, 3.4],
  [-10.4, 3.6],
  [-10.1, 3.2],
  [-10.4, 2.8],
  [-10.9, 2.9],
];

interface Stream {
  name: string;
  line: Point[];
  halfWidthKm: (share: number) => number;
}

interface Lake {
  name: string;
  ring: Point[];
  islands: Point[][];
}

export interface Water {
  streams: Stream[];
  lakes: Lake[];
}

const shoreSteps = 6;
const northShorePoints = 9;

/** The shore from the east edge of the sheet to its south edge. */
export function makeShore(): Point[] {
  return smooth(shore, shoreSteps);
}

/** The river runs into the estuary without a line between them: one ring, up the left bank and down the right. */
function makeEstuary(river: Stream): Lake {
  const curve = makeShore();
  const mouth = (northShorePoints - 1) * shoreSteps + 1;
  const { left, right } = traceBanks(river);
  // What lies above the lake is drawn as a stream of its own.
  const belowMere = Math.round(left.length * 0.3);
  return {
    name: 'Tessaly Roads',
    ring: [
      ...curve.slice(0, mouth),
      ...left.slice(belowMere).reverse(),
      ...right.slice(belowMere),
      ...curve.slice(mouth),
      ...seaCorner,
    ],
    islands: [smoothRing(gullHolm)],
  };
}

/** The courses are drawn by hand; the curves between the points are computed. */
export function makeWater(): Water {
  const grows = (sourceKm: number, mouthKm: number) => (share: number) =>
    sourceKm + (mouthKm - sourceKm) * share ** 2.4;
  const river: Stream = { name: 'River Tessaly', line: smooth(tessaly), halfWidthKm: grows(0.022, 0.16) };
  return {
    streams: [
      river,
      { name: 'Ostrey Brook', line: smooth(ostreyBrook), halfWidthKm: grows(0.006, 0.014) },
      { name: 'Corrie Burn', line: smooth(corrieBurn), halfWidthKm: grows(0.006, 0.02) },
      { name: 'Salt Beck', line: smooth(saltBeck), halfWidthKm: grows(0.005, 0.018) },
    ],
    lakes: [
      makeEstuary(river),
      { name: 'Harrow Mere', ring: smoothRing(harrowMere), islands: [] },
      { name: 'Corrie Tarn', ring: smoothRing(tarn), islands: [] },
    ],
  };
}

/** Both banks of a stream from source to mouth, wider towards the mouth. */
export function traceBanks(stream: Stream): { left: Point[]; right: Point[] } {
  const stations = stationsKm(stream.line);
  const total = stations.at(-1) ?? 0;
  const left: Point[] = [];
  const right: Point[] = [];
  for (const km of stations) {
    const { point, along } = placeAt(stream.line, stations, km);
    const half = stream.halfWidthKm(km / total);
    left.push([point[0] - along[1] * half, point[1] + along[0] * half]);
    right.push([point[0] + along[1] * half, point[1] - along[0] * half]);
  }
  return { left, right };
}

/** Streams are wet where they are, lakes to their shore; `marginKm` keeps feet dry. */
export function isWet(water: Water, point: Point, marginKm: number): boolean {
  const inLake = water.lakes.some(
    (lake) => isInside(point, lake.ring) || distanceToLineKm(point, lake.ring) < marginKm,
  );
  if (inLake) return true;
  return water.streams.some(
    (stream) => distanceToLineKm(point, stream.line) < stream.halfWidthKm(0) + marginKm,
  );
}
