import type { AddressView, MapLayers, Pin, SnapView } from '../../shared/schemas/territory.ts';
import { getJson, sendJson } from './client.ts';

export const getMapLayers = () => getJson<MapLayers>('/api/territory/layers');
export const searchAddresses = (search: string) =>
  getJson<AddressView[]>('/api/territory/addresses', { search });
export const snapPin = (pin: Pin) => sendJson<SnapView>('POST', '/api/territory/snap', pin);
