import { Type, type Static } from '@sinclair/typebox';
import { oneLine } from './text.ts';

/*
 * The pre-application report: what the utility knows of a place before anybody applies there. Which items it lists follows
 * SGIP 1.2.3 (list from memory). No item names a device, a node or somebody else's project.
 */

export const PreApplicationRequest = Type.Object(
  {
    lat: Type.Number({ minimum: -90, maximum: 90, errorMessage: 'Latitude must be from −90 to 90 degrees' }),
    lng: Type.Number({
      minimum: -180,
      maximum: 180,
      errorMessage: 'Longitude must be from −180 to 180 degrees',
    }),
    phases: Type.Union([Type.Literal('ABC'), Type.Literal('one')], {
      errorMessage: 'Choose three-phase or one-phase',
    }),
    /** What the applicant has in mind; it changes nothing in the figures. */
    sizeKw: Type.Optional(
      Type.Number({
        exclusiveMinimum: 0,
        maximum: 20_000,
        errorMessage: 'Size must be more than 0 and at most 20,000 kilowatts',
      }),
    ),
    purpose: Type.Optional(oneLine('Say what it is for in 200 characters or fewer', 200)),
  },
  { additionalProperties: false },
);
export type PreApplicationRequest = Static<typeof PreApplicationRequest>;

/** Of one line section on the way, nearest the place first; null where the utility's records lack it. */
export interface SectionFigures {
  peakKw: number | null;
  minimumKw: number | null;
  daytimeFixedKw: number | null;
  daytimeTrackingKw: number | null;
}

/** How many of one kind stand on the way, and the range of their interrupting ratings. */
export interface DeviceCount {
  kind: string;
  count: number;
  leastInterruptingKa: number | null;
  mostInterruptingKa: number | null;
}

export interface PreApplicationFigures {
  kv: number;
  highSideKv: number | null;
  phases: string;
  lineType: 'three-wire' | 'four-wire' | null;
  distanceKm: number;
  /** Whether the whole way is backbone. */
  isMainline: boolean | null;
  /** "radial", or what else the place is on. */
  supply: 'radial' | 'closed-loop' | 'spot-network' | 'area-network' | 'no-source';
  bankKva: number | null;
  circuitPeakKw: number | null;
  circuitMinimumKw: number | null;
  /** Nameplate, kW or kVA where that alone is known. */
  existingOnCircuitKw: number;
  queuedOnCircuitKw: number;
  existingOnBankKw: number;
  queuedOnBankKw: number;
  /** Bank less what exists and what is queued. */
  availableOnBankKw: number | null;
  sections: SectionFigures[];
  devices: DeviceCount[];
  regulators: number;
  capacitorsOnCircuit: number;
  hasTapChanger: boolean | null;
  /** Least current-carrying capacity on the way. */
  limitingAmpacityA: number | null;
  threePhaseFaultA: number | null;
  lineGroundFaultA: number | null;
  /** Interrupting ratings on the way that are used beyond the share given, as things stand. */
  nearRating: number;
  stabilityLimited: boolean | null;
}

export interface PreApplicationReport {
  publicId: string;
  number: string;
  requestedAt: string;
  requestedBy: string;
  organisation: string;
  lat: number;
  lng: number;
  sizeKw: number | null;
  purpose: string | null;
  substation: string;
  circuit: string;
  modelVersion: number;
  figures: PreApplicationFigures;
}
