import type { Crossing } from './crossings.ts';
import { laneName, villages } from './names.ts';
import { at, distanceKm, distanceToLineKm, placeAt, stationsKm, type Point } from './plane.ts';
import { makeDice, type Dice } from './random.ts';
import { lengthKm, type Road } from './road.ts';
import { isWet, type Water } from './water.ts';

const sheet = { eastKm: 12.6, northKm: 9.2 };
const strideKm = 0.09;

interface Habit {
  spacingKm: readonly [number, number];
  longestKm: readonly [number, number];
  /** Lanes shorter than this, after stopping short of water or another road, are not drawn. */
  shortestKm: number;
  clearanceKm: number;
  wander: number;
}

const country: Habit = {
  spacingKm: [0.36, 0.8],
  longestKm: [0.5, 2.1],
  shortestKm: 0.4,
  clearanceKm: 0.24,
  wander: 0.16,
};
const byway: Habit = { ...country, spacingKm: [0.45, 0.9], longestKm: [0.35, 0.9], shortestKm: 0.3 };
const village: Habit = {
  spacingKm: [0.11, 0.17],
  longestKm: [0.16, 0.42],
  shortestKm: 0.12,
  clearanceKm: 0.075,
  wander: 0.1,
};

interface Box {
  road: Road;
  low: Point;
  high: Point;
}

function boxOf(road: Road): Box {
  const [east, north] = [road.line.map((p) => p[0]), road.line.map((p) => p[1])];
  return {
    road,
    low: [Math.min(...east), Math.min(...north)],
    high: [Math.max(...east), Math.max(...north)],
  };
}

function isNear(box: Box, point: Point, km: number): boolean {
  const outside =
    point[0] < box.low[0] - km ||
    point[0] > box.high[0] + km ||
    point[1] < box.low[1] - km ||
    point[1] > box.high[1] + km;
  return !outside && distanceToLineKm(point, box.road.line) < km;
}

/** Walks off the host until the lane is long enough, or something is in the way. */
function walkLane(
  host: Road,
  atKm: number,
  side: 1 | -1,
  habit: Habit,
  dice: Dice,
  boxes: readonly Box[],
  water: Water,
): Point[] {
  const start = placeAt(host.line, host.stations, atKm);
  let heading = Math.atan2(start.along[1], start.along[0]) + (side * Math.PI) / 2 + dice.between(-0.45, 0.45);
  let bend = dice.between(-habit.wander, habit.wander);
  const wanted = dice.between(...habit.longestKm);
  const line: Point[] = [start.point];
  for (let km = 0; km < wanted; km += strideKm) {
    const from = at(line, -1);
    const next: Point = [from[0] + strideKm * Math.cos(heading), from[1] + strideKm * Math.sin(heading)];
    const free = Math.min(habit.clearanceKm, 0.7 * distanceKm(start.point, next));
    const blocked =
      Math.abs(next[0]) > sheet.eastKm ||
      Math.abs(next[1]) > sheet.northKm ||
      isWet(water, next, 0.03) ||
      boxes.some((box) => isNear(box, next, free));
    if (blocked) break;
    line.push(next);
    bend = 0.8 * bend + dice.between(-habit.wander, habit.wander) * 0.6;
    heading += bend;
  }
  return line;
}

function growAlong(
  host: Road,
  span: readonly [number, number],
  habit: Habit,
  dice: Dice,
  boxes: Box[],
  water: Water,
): Road[] {
  const grown: Road[] = [];
  let side: 1 | -1 = dice.chance(0.5) ? 1 : -1;
  for (
    let km = span[0] + dice.between(...habit.spacingKm) / 2;
    km < span[1];
    km += dice.between(...habit.spacingKm)
  ) {
    side = dice.chance(0.8) ? (side === 1 ? -1 : 1) : side;
    const line = walkLane(host, km, side, habit, dice, boxes, water);
    const stations = stationsKm(line);
    if (at(stations, -1) < habit.shortestKm) continue;
    const lane: Road = {
      name: laneName(boxes.length),
      rank: 'lane',
      line,
      stations,
      marks: new Map(),
      host: { road: host.name, atKm: km },
    };
    grown.push(lane);
    boxes.push(boxOf(lane));
  }
  return grown;
}

/** Villages first, close and short; then lanes off the through roads; then byways off the longer lanes. */
export function growLanes(fixed: readonly Road[], water: Water): Road[] {
  const dice = makeDice(1847);
  const boxes = fixed.map(boxOf);
  const hosts = fixed.filter(
    (road) => road.rank !== 'lane' && !road.marks.has('High Street and Market Street'),
  );
  const inVillages = hosts.flatMap((host) =>
    [...host.marks]
      .filter(([name]) => name in villages)
      .flatMap(([name, km]) => {
        const reach = villages[name as Crossing] ?? 0;
        const span = [Math.max(0, km - reach), Math.min(lengthKm(host), km + reach)] as const;
        return growAlong(host, span, village, dice, boxes, water);
      }),
  );
  const lanes = hosts.flatMap((host) =>
    growAlong(host, [0.3, lengthKm(host) - 0.3], country, dice, boxes, water),
  );
  const byways = lanes
    .filter((lane) => lengthKm(lane) > 0.9)
    .flatMap((lane) => growAlong(lane, [0.35, lengthKm(lane) - 0.1], byway, dice, boxes, water));
  return [...inVillages, ...lanes, ...byways];
}
