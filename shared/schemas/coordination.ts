import type { TimeCurve } from './study-utility.ts';
import type { WorkingStep } from './working.ts';

/*
 * How the devices between the source and the point of interconnection trip, one against the next, before and after the
 * project: enough to draw their time–current curves and to list what changes. All currents are those in the device itself.
 */

/** Current in A at the device's own voltage, and time in s. */
export type CurvePoint = readonly [amps: number, seconds: number];

/** One line of a plot; a fuse has two. Points are spaced evenly on a logarithmic scale, by rising current. */
export type CurveLine = {
  readonly name: 'operating' | 'minimum melt' | 'total clear';
  readonly points: readonly CurvePoint[];
};

export type PlottedCurve = {
  readonly kind: TimeCurve['kind'];
  /** "IEEE very inverse, pickup 480 A, time dial 2, instantaneous at 4,000 A". */
  readonly words: string;
  /** The standard that the constants are from. */
  readonly source: string;
  /** null: a fuse. */
  readonly pickupA: number | null;
  readonly lines: readonly CurveLine[];
};

/** Which relay element sees the fault: the largest phase current, or the residual 3I0. */
export type CoordinationElement = 'phase' | 'ground';

/** What a device carries for one fault, and when it trips; null: not at all, or its curve is not known. */
export type DeviceOperation = { readonly amps: number; readonly seconds: number | null };

/** A bolted fault at the near or far end of a device's zone, before and after the project. */
export type ZoneFault = {
  readonly element: CoordinationElement;
  readonly end: 'near' | 'far';
  /** The faulted node. */
  readonly node: string;
  /** Line to line for the phase element and line to ground for the ground element at the far end; the largest at the near end. */
  readonly fault: 'threePhase' | 'lineGround' | 'lineLine' | 'lineLineGround';
  readonly before: DeviceOperation;
  readonly after: DeviceOperation;
};

export type CoordinatedDevice = {
  readonly id: string;
  readonly kind: string;
  /** Nominal voltage where it stands, to which its amperes belong. */
  readonly kv: number;
  readonly phasePickupA: number | null;
  readonly groundPickupA: number | null;
  /** Trips only for current that leaves the substation; null: not said. */
  readonly directional: boolean | null;
  /** Shortest time open before it closes again, s; 0: it does not reclose; null: not said. */
  readonly deadTimeS: number | null;
  readonly phaseCurve: PlottedCurve | null;
  readonly groundCurve: PlottedCurve | null;
  readonly faults: readonly ZoneFault[];
};

/** Trip times of two neighbours for the same fault: `first` should trip before `backup`, by the margin. */
export type PairTimes = {
  readonly first: DeviceOperation;
  readonly backup: DeviceOperation;
  /** Backup less first; null where one of them does not trip or its curve is not known. */
  readonly marginS: number | null;
};

export type CoordinationPair = {
  /** Further from the source. */
  readonly first: string;
  /** The next automatic device towards the source. */
  readonly backup: string;
  readonly element: CoordinationElement;
  /** Of the zone of `first`. */
  readonly end: 'near' | 'far';
  readonly node: string;
  readonly before: PairTimes;
  readonly after: PairTimes;
  /** What the project's infeed changes, in one sentence. */
  readonly words: string;
};

export type Coordination = {
  /** From the source to the point of interconnection. */
  readonly devices: readonly CoordinatedDevice[];
  readonly pairs: readonly CoordinationPair[];
  readonly working: readonly WorkingStep[];
  /** What a reader must know before using it. */
  readonly caution: string;
};

export const coordinationCaution =
  'On paper only: relay settings and their coordination remain the responsibility of the protection engineer. Load current, ' +
  'relay and breaker tolerances, fuse damage and reclosing sequences are not in these curves.';
