import * as L from 'leaflet';
import type { ModelDrawing } from '../../../shared/schemas/territory.ts';

const phaseWords: Record<number, string> = { 1: 'one', 2: 'two', 3: 'three' };

/** A model drawn by line weight and dash: three, two, one phase. Circuits are told apart by their names on hover. */
export function drawNetwork(map: L.Map, drawing: ModelDrawing): L.LayerGroup {
  const group = L.layerGroup();
  for (const line of drawing.lines) {
    const weight = phaseWords[line.phases.length] ?? 'three';
    L.polyline(
      line.path.map(([lng, lat]) => L.latLng(lat, lng)),
      { className: `map-feeder map-feeder-${weight}`, interactive: false },
    ).addTo(group);
  }
  for (const device of drawing.devices) {
    L.circleMarker([device.lat, device.lng], { radius: 3, className: 'map-device' })
      .bindTooltip(`${device.kind} ${device.id}`)
      .addTo(group);
  }
  const { lat, lng, name } = drawing.substation;
  L.marker([lat, lng], {
    interactive: false,
    keyboard: false,
    icon: L.divIcon({ className: 'map-substation', html: labelled(name), iconSize: [14, 14] }),
  }).addTo(group);
  return group.addTo(map);
}

function labelled(name: string): HTMLElement {
  const text = document.createElement('span');
  text.textContent = name;
  return text;
}
