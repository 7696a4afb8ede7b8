import { crossings, handDrawnRoads, isCrossing } from './crossings.ts';
import { growLanes } from './lanes.ts';
import type { Point } from './plane.ts';
import { drawRoad, type Road } from './road.ts';
import { makeTownStreets } from './town.ts';
import type { Water } from './water.ts';

/** Every road of the vale: the through roads by hand, the town's streets, then the lanes that grow off them. */
export function makeRoads(water: Water): Road[] {
  const through = handDrawnRoads.map((road) =>
    drawRoad(
      road.name,
      road.rank,
      road.via.map((stop) =>
        typeof stop === 'string' && isCrossing(stop)
          ? { name: stop, point: crossings[stop] }
          : { name: null, point: stop as Point },
      ),
    ),
  );
  const fixed = [...through, ...makeTownStreets(water)];
  return [...fixed, ...growLanes(fixed, water)];
}
