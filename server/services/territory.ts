import { findSetting } from '../../db/repositories/settings.ts';
import type { AddressView, MapLayers, Pin, SnapView } from '../../shared/schemas/territory.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { notFound } from '../errors.ts';
import { snapToNode } from './snapping.ts';

export async function getMapLayers(deps: Deps): Promise<MapLayers> {
  const layers = (await findSetting(deps.db, 'map.layers')) as MapLayers | undefined;
  if (layers === undefined) throw notFound('The map of the territory');
  return layers;
}

const mostAddresses = 10;

/** Addresses that hold every word of what was typed, in any order. */
export async function searchAddresses(deps: Deps, search: string): Promise<AddressView[]> {
  const words = search
    .toLowerCase()
    .split(/[\s,]+/)
    .filter(Boolean);
  if (words.length === 0) return [];
  const addresses = ((await findSetting(deps.db, 'map.addresses')) as AddressView[] | undefined) ?? [];
  return addresses
    .filter(({ label }) => words.every((word) => label.toLowerCase().includes(word)))
    .slice(0, mostAddresses);
}

/** What a person may know of the place where a pin would connect: the node itself is for staff. */
export async function snapPin(deps: Deps, context: SignedInContext, pin: Pin): Promise<SnapView> {
  const { found, reachMetres } = await snapToNode(deps.db, pin);
  if (found === undefined) return { found: null, reachMetres };
  const { model, node } = found;
  const place = { modelCode: model.code, id: node.nodeId, lat: node.lat, lng: node.lng };
  return {
    found: {
      feeder: node.circuit,
      substation: model.substation,
      kv: node.kv,
      phases: node.phases,
      distanceMetres: Math.round(found.distanceMetres),
      ...(context.actor.role !== 'applicant' && { node: place }),
    },
    reachMetres,
  };
}
