import type { Position } from 'geojson';
import { describe, expect, test } from 'vitest';
import { makeDemoAddresses } from '../../../db/seeds/demo/addresses.ts';
import { makeDemoModels } from '../../../db/seeds/demo/feeders.ts';
import { makeDemoMap } from '../../../db/seeds/demo/map.ts';

const map = makeDemoMap();
const addresses = makeDemoAddresses();
const layers = Object.entries(map).map(([name, layer]) => ({ name, layer }));

const kmPerDegree = { lng: 91.6, lat: 110.9 };

function kmBetween(a: Position, b: Position): number {
  return Math.hypot((a[0]! - b[0]!) * kmPerDegree.lng, (a[1]! - b[1]!) * kmPerDegree.lat);
}

function kmToLine(point: Position, line: readonly Position[]): number {
  return Math.min(
    ...line.slice(1).map((end, i) => {
      const start = line[i]!;
      const length = kmBetween(start, end) || 1e-9;
      const along =
        ((point[0]! - start[0]!) * (end[0]! - start[0]!) * kmPerDegree.lng ** 2 +
          (point[1]! - start[1]!) * (end[1]! - start[1]!) * kmPerDegree.lat ** 2) /
        length ** 2;
      const t = Math.min(1, Math.max(0, along));
      return kmBetween(point, [start[0]! + t * (end[0]! - start[0]!), start[1]! + t * (end[1]! - start[1]!)]);
    }),
  );
}

describe('the demo map', () => {
  test('made twice is the same to the last byte', () => {
    expect(JSON.stringify(makeDemoMap())).toBe(JSON.stringify(map));
  });

  test('is smaller than 400 kB', () => {
    expect(Buffer.byteLength(JSON.stringify(map))).toBeLessThan(400_000);
  });

  test.each(layers)('$name has features, none of them empty, and every ring is closed', ({ layer }) => {
    expect(layer.features.length).toBeGreaterThan(0);
    for (const { geometry } of layer.features) {
      const polygons =
        geometry.type === 'Polygon'
          ? [geometry.coordinates]
          : geometry.type === 'MultiPolygon'
            ? geometry.coordinates
            : [];
      for (const ring of polygons.flat()) {
        expect(ring.length).toBeGreaterThan(3);
        expect(ring.at(-1)).toEqual(ring[0]);
      }
      if (geometry.type === 'LineString') expect(geometry.coordinates.length).toBeGreaterThan(1);
    }
  });

  test('has roads of three classes, each with a name of its own', () => {
    const roads = map.roads.features.map((feature) => feature.properties);
    expect(new Set(roads.map((road) => road.class))).toEqual(new Set(['trunk', 'road', 'lane']));
    expect(new Set(roads.map((road) => road.name)).size).toBe(roads.length);
  });

  test('has its feeders along its roads: every pole stands within 40 m of one', () => {
    const roads = map.roads.features.flatMap(({ geometry }) =>
      geometry.type === 'LineString' ? [geometry.coordinates] : [],
    );
    const poles = makeDemoModels()
      .flatMap(({ content }) => content.feeder.nodes)
      .filter((node) => /^[A-Z]{2}\d-\d+$/.test(node.id));
    const far = poles.filter(
      ({ position }) => !roads.some((road) => kmToLine(position ?? [0, 0], road) < 0.04),
    );
    expect(far.map((pole) => pole.id)).toEqual([]);
  });

  test('has about 150 addresses, no two alike, each within 100 m of a pole', () => {
    expect(addresses.length).toBeGreaterThan(140);
    expect(new Set(addresses.map((address) => address.label)).size).toBe(addresses.length);
    const poles = makeDemoModels().flatMap(({ content }) =>
      content.feeder.nodes.map((node) => node.position ?? [0, 0]),
    );
    const far = addresses.filter(({ lat, lng }) => !poles.some((pole) => kmBetween(pole, [lng, lat]) < 0.1));
    expect(far).toEqual([]);
    expect(JSON.stringify(makeDemoAddresses())).toBe(JSON.stringify(addresses));
  });
});
