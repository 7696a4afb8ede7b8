import { Type, type Static } from '@sinclair/typebox';

/** Where a pin stands and which phases the project needs. */
export const Pin = Type.Object(
  {
    lat: Type.Number({ minimum: -90, maximum: 90, errorMessage: 'Latitude must be between −90 and 90' }),
    lng: Type.Number({ minimum: -180, maximum: 180, errorMessage: 'Longitude must be between −180 and 180' }),
    phases: Type.Union([Type.Literal('ABC'), Type.Literal('one')], {
      errorMessage: 'Choose three-phase or one-phase',
    }),
  },
  { additionalProperties: false },
);
export type Pin = Static<typeof Pin>;

/**
 * What an applicant may know of the nearest node that can take the project: never its id or place.
 * `node` is filled for staff only. `null` when nothing that can take the phases is within reach.
 */
export interface SnapView {
  found: {
    feeder: string;
    substation: string;
    kv: number;
    phases: string;
    distanceMetres: number;
    node?: { modelCode: string; id: string; lat: number; lng: number };
  } | null;
  reachMetres: number;
}

export interface AddressView {
  label: string;
  lat: number;
  lng: number;
}

/** GeoJSON FeatureCollections by layer name; kept loose because shared knows no GeoJSON package. */
export interface MapLayers {
  outline: unknown;
  water: unknown;
  woods: unknown;
  parcels: unknown;
  roads: unknown;
  places: unknown;
  contours: unknown;
}

export interface NetworkModelView {
  code: string;
  name: string;
  substation: string;
  versionNumber: number;
  publishedAt: string;
  nodeCount: number;
  kv: number;
  circuits: string[];
  queueLength: number;
}

/** A model drawn on the map (staff only): one entry a line, weight follows the number of phases. */
export interface ModelDrawing {
  code: string;
  /** `to` is the node at the end of the path. */
  lines: { circuit: string; phases: string; path: [lng: number, lat: number][]; to: string }[];
  devices: { id: string; kind: string; lat: number; lng: number }[];
  substation: { lat: number; lng: number; name: string };
}
