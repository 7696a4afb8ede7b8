import { isInside, type Point } from './plane.ts';
import { distanceToLineKm } from './plane.ts';
import type { Road } from './road.ts';
import { isWet, type Water } from './water.ts';

/** Answers quickly what lies near a place: roads are looked up by square kilometre. */
export interface Ground {
  isClear(point: Point, roadMarginKm: number, waterMarginKm: number): boolean;
}

const reachKm = 0.5;

export function surveyGround(roads: readonly Road[], water: Water): Ground {
  const squares = new Map<string, Set<Road>>();
  for (const road of roads) {
    for (const [east, north] of road.line) {
      for (const dx of [-reachKm, 0, reachKm]) {
        for (const dy of [-reachKm, 0, reachKm]) {
          const key = `${Math.floor(east + dx)}/${Math.floor(north + dy)}`;
          squares.set(key, (squares.get(key) ?? new Set()).add(road));
        }
      }
    }
  }
  return {
    isClear(point, roadMarginKm, waterMarginKm) {
      const near = squares.get(`${Math.floor(point[0])}/${Math.floor(point[1])}`) ?? new Set();
      for (const road of near) if (distanceToLineKm(point, road.line) < roadMarginKm) return false;
      return !isWet(water, point, waterMarginKm);
    },
  };
}

/** Whether two small outlines touch: any corner or middle of one inside the other. */
export function overlaps(a: readonly Point[], b: readonly Point[]): boolean {
  const middle = (ring: readonly Point[]): Point => [
    ring.reduce((sum, p) => sum + p[0], 0) / ring.length,
    ring.reduce((sum, p) => sum + p[1], 0) / ring.length,
  ];
  return [...a, middle(a)].some((p) => isInside(p, b)) || [...b, middle(b)].some((p) => isInside(p, a));
}
