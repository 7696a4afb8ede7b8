import type { Coordination } from './coordination.ts';
import type { Finding } from './findings.ts';
import type { FaultKind } from './study-result.ts';
import type { VoltageProfile } from './voltage-profile.ts';
import type { QuantityValue, WorkingStep } from './working.ts';

/*
 * The working sheet of a run: everything that an engineer needs to follow its numbers by hand, as plain data. Words and
 * layout come later (shared/sheet-layout.ts), the same for screen and paper.
 */

export const sheetFormat = 'feederwright.sheet/1';

/** Whose sheet it is, told by whoever asks for it: a run's record, or the command line. */
export type SheetOrigin = {
  utility?: string;
  /** The application's. */
  reference?: string;
  run?: string;
  studySha256?: string;
  resultSha256?: string;
  /** As it is printed: "14 March 2026, 09:05 EST". */
  computedAt?: string;
};

export type SheetState = 'none' | 'before' | 'after';
export type SequenceName = 'positive' | 'negative' | 'zero';

/** Something that ties a place to earth in a sequence, or sends current into it. */
export type SheetShunt = { kind: 'source' | 'machine' | 'bank' | 'inverter' | 'transformer'; id: string };

/** A node of the way from the source to the point of interconnection, and what leads there from the one before. */
export type SheetPlace = {
  node: string;
  kv: number;
  /** Along the lines from the source. */
  km: number;
  /** Nothing for the first; a closed switch has no impedances. */
  by?: {
    kind: 'line' | 'transformer' | 'switch';
    id: string;
    km: number;
    connection?: string;
    /** Per unit. */
    z1: QuantityValue | null;
    /** Where the zero sequence goes through, is earthed at one end, or stops. */
    zeroSequence: 'series' | 'earthed-before' | 'earthed-after' | 'open';
    z0: QuantityValue | null;
  };
  /** Protective devices on what leads here. */
  devices: string[];
  /** At this place, and behind whatever branches off here. */
  shunts: SheetShunt[];
  ofProject: SheetShunt[];
  /** Whether generation or ground sources hang off the path here. */
  branchesOff: boolean;
  threePhaseA: Record<SheetState, number | null>;
  lineGroundA: Record<SheetState, number | null>;
};

/** One sequence in one state, reduced to the point of interconnection; on a lateral to its tap. */
export type SheetNetwork = {
  state: SheetState;
  sequence: SequenceName;
  /** Per unit; null where it is open. */
  z: QuantityValue | null;
  /** The state, before this one, that it is the same as; then there are no steps. */
  sameAs?: { state: SheetState; sequence: SequenceName };
  /** Whether the steps add it up; a meshed network is reduced by elimination, which no hand follows. */
  isAddedUp: boolean;
  steps: readonly WorkingStep[];
};

export type SheetFault = {
  kind: FaultKind;
  state: SheetState;
  /** Largest phase current; null where the place lacks the phases or nothing feeds it. */
  amps: number | null;
  /** The state, before this one, in which networks, voltages and so all steps are the same; then there are none. */
  sameAs?: SheetState;
  steps: readonly WorkingStep[];
};

export type SheetDevice = {
  id: string;
  kind: string;
  branch: string;
  interruptingKa: number | null;
  beforeDutyA: number;
  afterDutyA: number | null;
  beforeAvailableA: number;
  afterAvailableA: number | null;
  /** Of the rating, in percent. */
  beforeLoadingPercent: number | null;
  afterLoadingPercent: number | null;
  worst?: { scenario: string; state: 'before' | 'after'; availableA: number; loadingPercent: number | null };
};

export type SheetFinding = { finding: Finding; working: readonly WorkingStep[] };

export type Sheet = {
  format: typeof sheetFormat;
  study: string;
  origin: SheetOrigin;
  ruleSet: { code: string; number: number; name: string };
  method: 'prefault' | 'iec60909';
  poi: { node: string; kv: number; phases: string };
  basis: readonly WorkingStep[];
  path: readonly SheetPlace[];
  /** From the study file to per unit, for every element that a network's steps name. */
  elements: readonly WorkingStep[];
  networks: readonly SheetNetwork[];
  faults: readonly SheetFault[];
  devices: readonly SheetDevice[];
  /** Names of the operating cases that were solved; the first is the model as it stands. */
  cases: readonly string[];
  findings: readonly SheetFinding[];
  /** What a load flow gives along the way, where one was asked for. */
  voltage?: readonly VoltageProfile[];
  /** How the devices on the way trip, where their curves are known. */
  coordination?: Coordination;
  warnings: readonly string[];
};
