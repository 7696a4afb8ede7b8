import * as L from 'leaflet';
import type { FeatureCollection } from 'geojson';
import type { MapLayers } from '../../../shared/schemas/territory.ts';

/** Base layers from bottom to top; each feature gets a class of its own kind, and map.css draws it. */
const order = ['outline', 'woods', 'contours', 'parcels', 'water'] as const;

function classOf(layer: string, properties: Record<string, unknown> | null): string {
  const kind = properties?.class ?? properties?.kind;
  return `map-${layer}${typeof kind === 'string' || typeof kind === 'number' ? ` map-${layer}-${kind}` : ''}`;
}

/** Names of villages, farms and water as quiet lettering; farms and hills appear when the sheet is near enough. */
function letterPlaces(places: FeatureCollection): L.LayerGroup {
  const group = L.layerGroup();
  for (const { geometry, properties } of places.features) {
    if (geometry.type !== 'Point') continue;
    const [lng, lat] = geometry.coordinates as [number, number];
    const text = document.createElement('span');
    text.textContent = String(properties?.name ?? '');
    L.marker([lat, lng], {
      interactive: false,
      keyboard: false,
      icon: L.divIcon({
        className: `map-name map-name-${String(properties?.kind)}`,
        html: text,
        iconSize: [0, 0],
      }),
    }).addTo(group);
  }
  return group;
}

function drawLayer(map: L.Map, layers: MapLayers, name: (typeof order)[number] | 'roads'): void {
  L.geoJSON(layers[name] as FeatureCollection, {
    interactive: false,
    style: (feature) => ({ className: classOf(name, feature?.properties ?? null) }),
  }).addTo(map);
}

/** All that lies outside the outline, so that no contour or stream runs over the edge of the sheet. */
function coverSurroundings(outline: FeatureCollection): L.Polygon {
  const far = L.geoJSON(outline).getBounds().pad(3);
  const corners = [far.getNorthWest(), far.getNorthEast(), far.getSouthEast(), far.getSouthWest()];
  const holes = outline.features.flatMap(({ geometry }) =>
    geometry.type === 'Polygon'
      ? [(geometry.coordinates[0] ?? []).map(([lng = 0, lat = 0]) => L.latLng(lat, lng))]
      : [],
  );
  return L.polygon([corners, ...holes], { className: 'map-surroundings', interactive: false });
}

/** The bounds of the territory. */
export const boundTerritory = (layers: MapLayers): L.LatLngBounds =>
  L.geoJSON(layers.outline as FeatureCollection).getBounds();

/** Draws the sheet's ground; the map must have a view already. */
export function drawTerritory(map: L.Map, layers: MapLayers): void {
  for (const name of order) drawLayer(map, layers, name);
  coverSurroundings(layers.outline as FeatureCollection).addTo(map);
  drawLayer(map, layers, 'roads');
  letterPlaces(layers.places as FeatureCollection).addTo(map);
}
