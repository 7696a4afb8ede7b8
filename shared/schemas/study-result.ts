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
};

export type DeviceResult = { before: DeviceDuty; after?: DeviceDuty };

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

export type StudyResult = {
  format: typeof resultFormat;
  nodes: Record<string, NodeResult>;
  devices: Record<string, DeviceResult>;
  project?: ProjectResult;
  grounding?: { connected: Grounding | null; island: Grounding | null };
  findings: Finding[];
  warnings: string[];
};
