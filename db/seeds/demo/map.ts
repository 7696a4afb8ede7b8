import type { Feature, FeatureCollection, Geometry, Position } from 'geojson';
import { crossings, isCrossing } from './crossings.ts';
import { surveyGround } from './ground.ts';
import { villages } from './names.ts';
import { makeParcels, makeWoods } from './parcels.ts';
import { at, simplify, smooth, toLngLat, type Point } from './plane.ts';
import { hills, makeContours } from './relief.ts';
import { lengthKm, type Road } from './road.ts';
import { makeRoads } from './roads.ts';
import { makeShore, makeWater, traceBanks, type Water } from './water.ts';

type Layer = FeatureCollection<Geometry, Record<string, string | number>>;

export interface DemoMap {
  outline: Layer;
  water: Layer;
  woods: Layer;
  parcels: Layer;
  roads: Layer;
  places: Layer;
  contours: Layer;
}

/** The utility's boundary on land; the shore closes it. */
const landBoundary: readonly Point[] = [
  [3.3, -9.9],
  [-1.5, -9.6],
  [-5.6, -9.9],
  [-9.8, -9.8],
  [-12.6, -8.9],
  [-13.2, -4.5],
  [-12.9, 0.5],
  [-13.3, 5],
  [-12.9, 9],
  [-9, 9.7],
  [-4, 9.4],
  [1, 9.1],
  [5.5, 9.5],
  [10.4, 9.6],
  [13.1, 9],
  [13.3, 4],
  [13, -0.5],
  [13.35, -3.95],
];

const waterLabels: readonly { name: string; point: Point }[] = [
  { name: 'River Tessaly', point: [-3.4, 3.1] },
  { name: 'Harrow Mere', point: [-4.7, 5.5] },
  { name: 'Corrie Tarn', point: [-10.5, 3.2] },
  { name: 'Tessaly Roads', point: [9.6, -8.2] },
  { name: 'Gull Holm', point: [9.6, -6.65] },
  { name: 'Ostrey Brook', point: [-11, -1.7] },
  { name: 'Corrie Burn', point: [6.4, 4.9] },
  { name: 'Salt Beck', point: [0.3, -7.2] },
];

/** Less than the width of a drawn line, so that dropping points cannot be seen. */
const hairKm = 0.003;

function drawn(line: readonly Point[]): Position[] {
  return simplify(line, hairKm).map((point) => toLngLat(point));
}

function closed(ring: readonly Point[]): Position[] {
  return drawn([...ring, at(ring, 0)]);
}

function layer(features: Layer['features']): Layer {
  return { type: 'FeatureCollection', features };
}

function feature(geometry: Geometry, properties: Record<string, string | number>): Layer['features'][number] {
  return { type: 'Feature', properties, geometry } satisfies Feature;
}

function makeWaterLayer(water: Water): Layer {
  const streams = water.streams.map((stream) => {
    const { left, right } = traceBanks(stream);
    // The river below the mere is part of the estuary's outline.
    const kept = stream.name === 'River Tessaly' ? Math.round(left.length * 0.32) : left.length;
    const banks = [...left.slice(0, kept), ...right.slice(0, kept).reverse()];
    return feature({ type: 'Polygon', coordinates: [closed(banks)] }, { kind: 'stream', name: stream.name });
  });
  const lakes = water.lakes.map((lake) =>
    feature(
      { type: 'Polygon', coordinates: [closed(lake.ring), ...lake.islands.map(closed)] },
      { kind: lake.name === 'Tessaly Roads' ? 'sea' : 'lake', name: lake.name },
    ),
  );
  return layer([...streams, ...lakes]);
}

function makeRoadLayer(roads: readonly Road[]): Layer {
  return layer(
    roads.map(({ name, rank, line }) =>
      feature({ type: 'LineString', coordinates: drawn(line) }, { class: rank, name }),
    ),
  );
}

/** Farms stand at the ends of the longer lanes and are called after them. */
function listFarms(roads: readonly Road[]): { name: string; point: Point }[] {
  return roads
    .filter((road) => road.host !== null && lengthKm(road) > 1.3)
    .map((road) => ({ name: `${road.name.split(' ').at(-2)} Farm`, point: at(road.line, -1) }))
    .filter((farm, i, all) => all.findIndex((other) => other.name === farm.name) === i)
    .slice(0, 26);
}

function makePlaceLayer(roads: readonly Road[]): Layer {
  const named = (kind: string, name: string, point: Point) =>
    feature({ type: 'Point', coordinates: toLngLat(point) }, { kind, name });
  return layer([
    named('town', 'Marrowbank', [0.3, -1.12]),
    ...Object.keys(villages).flatMap((name) =>
      isCrossing(name) ? [named('village', name, crossings[name])] : [],
    ),
    ...listFarms(roads).map((farm) => named('farm', farm.name, farm.point)),
    ...hills.map((hill) => named('hill', hill.name, hill.top)),
    ...waterLabels.map((label) => named('water', label.name, label.point)),
  ]);
}

/** Plots and fields of one settlement are one feature: the outlines carry no names of their own. */
function makeParcelLayer(parcels: ReturnType<typeof makeParcels>): Layer {
  const groups = new Map<string, { kind: string; place: string; rings: Position[][][] }>();
  for (const { kind, place, ring } of parcels) {
    const group = groups.get(`${kind} ${place}`) ?? { kind, place, rings: [] };
    group.rings.push([closed(ring)]);
    groups.set(`${kind} ${place}`, group);
  }
  return layer(
    [...groups.values()].map(({ kind, place, rings }) =>
      feature({ type: 'MultiPolygon', coordinates: rings }, { kind, place }),
    ),
  );
}

/** The base layers of the demo's sheet; under 400 kB in all. */
export function makeDemoMap(): DemoMap {
  const water = makeWater();
  const roads = makeRoads(water);
  const ground = surveyGround(roads, water);
  const parcels = makeParcels(roads, ground);
  const outline = [...makeShore(), ...smooth(landBoundary, 4).slice(1, -1)];
  return {
    outline: layer([feature({ type: 'Polygon', coordinates: [closed(outline)] }, { name: 'Tessaly Vale' })]),
    water: makeWaterLayer(water),
    woods: layer(
      makeWoods(ground, parcels).map((ring) =>
        feature({ type: 'Polygon', coordinates: [closed(ring)] }, { kind: 'wood' }),
      ),
    ),
    parcels: makeParcelLayer(parcels),
    roads: makeRoadLayer(roads),
    places: makePlaceLayer(roads),
    contours: layer(
      makeContours(water).map(({ metres, lines }) =>
        feature(
          {
            type: 'MultiLineString',
            coordinates: lines.map((line) => line.map((point) => toLngLat(point, 4))),
          },
          { metres },
        ),
      ),
    ),
  };
}
