import type { Finding } from './findings.ts';
import type { Impedance } from './study.ts';

/* The result of a study, format feederwright.result/1. Currents in A, impedances in ohms at the node's own voltage. */

export const resultFormat = 'feederwright.result/1';

export type FaultKind = 'threePhase' | 'lineGround' | 'lineLine' | 'lineLineGround';

/** The largest phase current of each fault, null where the node lacks the phases. */
export type FaultCurrents = Record<FaultKind | 'lineLineGroundEarth', number | null>;

/** Thevenin impedances of a three-phase node; z0 is null where the zero sequence is open, all where nothing feeds it. */
export type NodeImpedances = { z1: Impedance | null; z2: Impedance | null; z0: Impedance | null };

export type NodeState = FaultCurrents & Partial<NodeImpedances>;

export type MinimumState = Record<'threePhase' | 'lineGround' | 'lineLine', number | null>;

export type NodeResult = { none: NodeState; before: NodeState; after?: NodeState; minimum: MinimumState };

export type DeviceDuty = {
  dutyA: number;
  fault: FaultKind | null;
  /** Whether the device carries most when the branch feeds the fault or when all the rest does. */
  side: 'branch' | 'rest';
  /** Duty over interrupting rating, null without a rating. */
  loading: number | null;
  availableA: number;
  availableLoading: number | null;
} & Partial<DeviceAsymmetry>;

/** What the direct current of the first cycles adds at a device that has a rating. X/R of 10,000 stands for any above. */
export type DeviceAsymmetry = {
  /** Of the fault that is largest with its direct current in: X/R of the Thevenin impedance, */
  xr: number;
  /** and by reducing resistances and reactances separately; this one gives the values below. */
  xrSeparate: number;
  /** Current half a cycle after the fault, direct current in, over symmetrical current. */
  asymmetry: number;
  /** Largest instantaneous current over all faults. */
  peakA: number;
  /** `availableLoading` with each fault counted as the rating demands at its X/R. */
  correctedLoading: number | null;
};

/** The scenario, by id, and the state with more current available at a device than the model as it stands has. */
export type WorstCase = Pick<DeviceDuty, 'availableA' | 'availableLoading' | 'dutyA' | 'loading'> & {
  scenario: string;
  state: 'before' | 'after';
};

/** Before and after are those of the model as it stands; `worst` is missing where no scenario of it is worse. */
export type DeviceResult = { before: DeviceDuty; after?: DeviceDuty; worst?: WorstCase };

export type PerFault = { threePhase: number | null; lineGround: number | null };

export type ProjectResult = {
  node: string;
  /** After over before. */
  faultLevelRatio: PerFault;
  /** What all generation adds, over what the sources alone give. */
  aggregateContribution: PerFault;
  shortCircuitRatio: number | null;
};

export type Grounding = {
  x0x1: number | null;
  r0x1: number | null;
  /** Largest voltage of a healthy phase, over line to neutral, in faults of one and of two lines to ground. */
  healthyPhasePu: number;
  /** The same as a share of line to line, in percent. */
  cogPercent: number;
};

/** Of a line that names a construction, ohms per km: rows and columns in the line's order of phases, then as if transposed. */
export type LineConstants = { zPerKm: Impedance[][]; z1: Impedance; z0: Impedance };

export type StudyResult = {
  format: typeof resultFormat;
  nodes: Record<string, NodeResult>;
  devices: Record<string, DeviceResult>;
  lines?: Record<string, LineConstants>;
  project?: ProjectResult;
  grounding?: { connected: Grounding | null; island: Grounding | null };
  findings: Finding[];
  warnings: string[];
};
