import { crossings, isCrossing } from './crossings.ts';
import { overlaps, type Ground } from './ground.ts';
import { villages } from './names.ts';
import { distanceKm, placeAt, smoothRing, type Point } from './plane.ts';
import { makeDice, type Dice } from './random.ts';
import { lengthKm, type Road } from './road.ts';

interface Parcel {
  kind: 'plot' | 'field';
  place: string;
  ring: Point[];
}

interface Habit {
  frontageKm: readonly [number, number];
  depthKm: readonly [number, number];
  setbackKm: number;
  chance: number;
}

const plots: Habit = { frontageKm: [0.045, 0.085], depthKm: [0.06, 0.1], setbackKm: 0.016, chance: 0.8 };
const fields: Habit = { frontageKm: [0.2, 0.34], depthKm: [0.18, 0.34], setbackKm: 0.03, chance: 0.55 };
const townName = 'Marrowbank';
const townHeart: Point = [0.3, -1.12];
const townReachKm = 1.35;

const settlements = Object.entries(villages).flatMap(([name, reachKm]) =>
  isCrossing(name) ? [{ name, heart: crossings[name] as Point, reachKm: reachKm + 0.12 }] : [],
);

/** The settlement whose houses a place counts among, if any. */
function findSettlement(point: Point): string | undefined {
  if (distanceKm(point, townHeart) < townReachKm) return townName;
  return settlements.find(({ heart, reachKm }) => distanceKm(point, heart) < reachKm)?.name;
}

/** The nearest settlement, however far. */
export function nearestSettlement(point: Point): string {
  const all = [{ name: townName, heart: townHeart }, ...settlements];
  const byDistance = all.sort((a, b) => distanceKm(point, a.heart) - distanceKm(point, b.heart));
  return byDistance[0]?.name ?? townName;
}

/** A four-sided outline beside the road, its back fence a little askew. */
function layOut(road: Road, km: number, side: 1 | -1, frontageKm: number, habit: Habit, dice: Dice): Point[] {
  const depthKm = dice.between(...habit.depthKm);
  const corner = (alongKm: number, awayKm: number): Point => {
    const { point, along } = placeAt(road.line, road.stations, alongKm);
    return [point[0] - side * along[1] * awayKm, point[1] + side * along[0] * awayKm];
  };
  const far = habit.setbackKm + depthKm;
  return [
    corner(km, habit.setbackKm),
    corner(km + frontageKm, habit.setbackKm),
    corner(km + frontageKm, far * dice.between(0.92, 1.08)),
    corner(km, far),
  ];
}

function alongRoad(road: Road, kind: Parcel['kind'], dice: Dice, ground: Ground, laid: Parcel[]): void {
  const habit = kind === 'plot' ? plots : fields;
  for (const side of [1, -1] as const) {
    let km = 0.02;
    while (km < lengthKm(road) - habit.frontageKm[0]) {
      const frontageKm = Math.min(dice.between(...habit.frontageKm), lengthKm(road) - km);
      const ring = layOut(road, km, side, frontageKm, habit, dice);
      const wanted = dice.chance(habit.chance);
      km += frontageKm;
      const heart = ring[2] ?? townHeart;
      const place = findSettlement(heart);
      if (!wanted || (kind === 'plot') !== (place !== undefined)) continue;
      const dry = ring.every((p) => ground.isClear(p, habit.setbackKm - 0.003, 0.015));
      const isFree = () =>
        !laid.some((other) => distanceKm(other.ring[0] ?? heart, heart) < 0.8 && overlaps(other.ring, ring));
      if (dry && isFree()) laid.push({ kind, place: place ?? nearestSettlement(heart), ring });
    }
  }
}

/** House plots in the settlements, fields along the lanes between them. */
export function makeParcels(roads: readonly Road[], ground: Ground): Parcel[] {
  const dice = makeDice(1851);
  const laid: Parcel[] = [];
  for (const road of roads) alongRoad(road, 'plot', dice, ground, laid);
  for (const road of roads) if (road.rank !== 'trunk') alongRoad(road, 'field', dice, ground, laid);
  return laid;
}

/** Woods fill what roads, water and fields leave free around a seed, up to their own size. */
export function makeWoods(ground: Ground, parcels: readonly Parcel[]): Point[][] {
  const dice = makeDice(1859);
  const woods: Point[][] = [];
  const rays = 16;
  const isFree = (point: Point) =>
    ground.isClear(point, 0.07, 0.05) &&
    !parcels.some(
      ({ ring }) => distanceKm(ring[0] ?? point, point) < 0.8 && overlaps(ring, [point, point, point]),
    );
  for (let tries = 0; tries < 150 && woods.length < 44; tries += 1) {
    const heart: Point = [dice.between(-12.6, 12.6), dice.between(-9.2, 9.3)];
    const sizeKm = dice.between(0.3, 0.85);
    if (!isFree(heart)) continue;
    const ring = Array.from({ length: rays }, (_, i): Point => {
      const angle = (2 * Math.PI * i) / rays;
      const wantedKm = sizeKm * dice.between(0.6, 1.15);
      let km = 0.06;
      const pointAt = (r: number): Point => [heart[0] + r * Math.cos(angle), heart[1] + r * Math.sin(angle)];
      while (km < wantedKm && isFree(pointAt(km + 0.05))) km += 0.05;
      return pointAt(km);
    });
    const apart = woods.every((other) => !overlaps(other, ring));
    const broad = ring.filter((p) => distanceKm(p, heart) > 0.18).length > rays / 2;
    if (apart && broad) woods.push(smoothRing(ring, 2));
  }
  return woods;
}
