import * as L from 'leaflet';
import type { RoomClass } from '../../../shared/room-words.ts';
import type { ModelDrawing } from '../../../shared/schemas/territory.ts';

/** Room at the far end of each line, by the weight of a line under it; where there is none it is hatched. */
export function drawRoom(
  map: L.Map,
  drawing: ModelDrawing,
  rooms: ReadonlyMap<string, RoomClass>,
): L.LayerGroup {
  const group = L.layerGroup();
  for (const line of drawing.lines) {
    const room = rooms.get(line.to);
    if (room === undefined) continue;
    L.polyline(
      line.path.map(([lng, lat]) => L.latLng(lat, lng)),
      { className: `map-room map-room-${room}`, interactive: false },
    ).addTo(group);
  }
  return group.addTo(map);
}
