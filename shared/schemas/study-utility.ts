import type { Impedance, Phases, TransformerConnection } from './study.ts';

/* What a study file may say of the network and its equipment beyond what fault currents need. */

/** What a generator's sheet and certificate say. */
export type Listing = {
  /** "UL 1741", "UL 1741 SB". */
  standard?: string;
  /** Abnormal operating performance category of IEEE 1547. */
  category?: 'I' | 'II' | 'III';
  /** Name of the settings profile it is delivered with. */
  profile?: string;
  /** Total rated-current distortion. */
  trdPercent?: number;
  /** Largest voltage in the load-rejection test, over nominal. */
  loadRejectionPercent?: number;
  /** Stops feeding an island by itself, as tested. */
  antiIslanding?: boolean;
};

/** How a small generator reaches its service transformer. */
export type ServiceTie = {
  transformer: string;
  /** Of a 240 V service with a centre tap: what goes to each half; kW. */
  firstHalfKw?: number;
  secondHalfKw?: number;
  /** Series impedance of secondary and drop, both ways, in ohms at the secondary's voltage. */
  drop?: Impedance;
  /** Of the customer's main panel. */
  panelInterruptingKa?: number;
};

/** Tripping time against current: an inverse-time curve of a standard, by its name, or points. */
export type TimeCurve =
  | {
      /** IEEE C37.112 and IEC 60255-151. */
      kind:
        | 'ieee-moderately-inverse'
        | 'ieee-very-inverse'
        | 'ieee-extremely-inverse'
        | 'iec-standard-inverse'
        | 'iec-very-inverse'
        | 'iec-extremely-inverse';
      pickupA: number;
      timeDial: number;
      /** Trips at this current without delay other than `instantaneousS`, 0.05 unless given. */
      instantaneousA?: number;
      instantaneousS?: number;
    }
  | { kind: 'definite-time'; pickupA: number; timeS: number }
  /** Of a fuse: pairs of current in A and time in s, by rising current. */
  | {
      kind: 'fuse';
      minimumMelt: [amps: number, seconds: number][];
      totalClear: [amps: number, seconds: number][];
    };

/** The bank that feeds the model's bus, and what lies behind it. */
export type Substation = {
  id: string;
  /** The id of a transformer of the model, where it has one; else the connection is told here. */
  transformer?: string;
  connection?: TransformerConnection;
  kva?: number;
  highSideKv?: number;
  /** Of all that the bank feeds. */
  minimumKw?: number;
  peakKw?: number;
  /** Trips the bank when the high side floats. */
  zeroSequenceVoltageProtection?: boolean;
  /** Whether power may flow back through the bank. */
  reverseFlow?: boolean;
  /** Whether a transient-stability limitation is posted, and what else generates on the transmission side. */
  stabilityLimited?: boolean;
  transmissionSideKw?: number;
};

/** A transformer that serves customers from the primary, with what its secondary has already. */
export type ServiceTransformer = {
  id: string;
  node: string;
  kva: number;
  secondaryV: number;
  phases?: Phases;
  /** 120/240 V with the middle earthed. */
  centreTapped?: boolean;
  /** More than one customer on it. */
  shared?: boolean;
  impedancePercent?: number;
  xr?: number;
  /** What is connected to it or ahead in the queue and stands in no list of generators: those that name it are added. */
  generationKw?: number;
  /** Series impedance of a usual secondary and drop from here, both ways, ohms at the secondary's voltage. */
  usualDrop?: Impedance;
};

/** A low-voltage network fed through protectors by several transformers. */
export type SecondaryNetwork = { id: string; kind: 'spot' | 'area'; nodes: string[]; peakKw?: number };

/** A step-voltage regulator at one end of a line; faults see the line alone. */
export type Regulator = {
  id: string;
  branch: string;
  end: 'from' | 'to';
  /** One control for each of these phases. */
  phases: Phases;
  /** Held voltage and the width of the band around it, over nominal. */
  setVoltagePu: number;
  bandwidthPu: number;
  /** Range and number of steps to each side: 0.1 and 16 unless given. */
  rangePu?: number;
  steps?: number;
  /** Line-drop compensation to a place down the line, ohms at the node's voltage. */
  compensation?: Impedance;
  /**
   * What it does when power flows back: stays where it is; holds the other side, as if the source were now there; or goes
   * on as before, as a setting for generation beyond it does.
   */
  reverse?: 'locked' | 'bidirectional' | 'cogeneration';
  ratedA?: number;
};

export type Capacitor = {
  id: string;
  node: string;
  phases: Phases;
  kvar: number;
  /** Switched on when the voltage falls below the first, off above the second, over nominal; fixed unless given. */
  switchedByVoltage?: [on: number, off: number];
  with?: string;
};

/** All that lies beyond `device`, seen from the source. */
export type Section = {
  id: string;
  device: string;
  peakKw?: number;
  minimumKw?: number;
  daytimeFixedKw?: number;
  daytimeTrackingKw?: number;
  /** Whether minimum loads count what customers use ("gross") or what is left after these generators ("net"). */
  minimumIs?: 'gross' | 'net';
  netOf?: string[];
  /** Share of the load that is tied to the earthed neutral, 0 to 1. */
  groundedLoadShare?: number;
  /** Of the largest customer, over the section's load; and whether load is spread evenly along it. */
  largestCustomerShare?: number;
  uniform?: boolean;
  /** Whether the section is fed from elsewhere at times, or feeds others. */
  transfers?: boolean;
};

/** What is known of a feeder of the model; lines and devices name it in `circuit`. */
export type Circuit = {
  id: string;
  lineType?: 'three-wire' | 'four-wire';
  /** Whether the interconnection rules apply to it. */
  subjectToRules?: boolean;
};
