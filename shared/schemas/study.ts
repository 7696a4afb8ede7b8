/*
 * The study file, format feederwright.study/1: a network model as it stands for one run, and the project in question.
 * Impedances are in ohms (per km in lines), voltages in kV line to line, lengths in km, ratings in kVA or kA.
 * A missing list is an empty one. The engine's reader (workers/engine/read-study.ts) checks every rule.
 */

export const studyFormat = 'feederwright.study/1';

/** Letters out of A, B, C, each at most once: "ABC", "AB", "C". */
export type Phases = string;

export type Impedance = { r: number; x: number };

/** How a neutral point is tied to earth; an impedance is in ohms. */
export type Neutral = 'solid' | 'ungrounded' | Impedance;

export type Node = {
  id: string;
  kv: number;
  phases: Phases;
  position?: [lng: number, lat: number];
  with?: string;
};

export type SourceStrength = { z1: Impedance; z2?: Impedance; z0?: Impedance };

export type Source = { id: string; node: string; max: SourceStrength; min?: SourceStrength };

/** An element that names in `with` the machine or inverter it came with leaves state `none` together with it. */
export type Line = {
  id: string;
  from: string;
  to: string;
  phases: Phases;
  km: number;
  z1: Impedance;
  z0: Impedance;
  /** The feeder of the model that the line belongs to. */
  circuit?: string;
  ampacityA?: number;
  with?: string;
};

/** `from` letter, `to` letter, clock hour of the lag of `to` behind `from`: "Dyn1", "YNyn0". */
export type TransformerConnection = string;

export type Transformer = {
  id: string;
  from: string;
  to: string;
  kva: number;
  connection: TransformerConnection;
  impedancePercent: number;
  xr: number;
  zeroImpedancePercent?: number;
  ratedKvTo?: number;
  neutralFrom?: Neutral;
  neutralTo?: Neutral;
  circuit?: string;
  with?: string;
};

export type Switch = {
  id: string;
  from: string;
  to: string;
  closed: boolean;
  circuit?: string;
  with?: string;
};

export type GroundingBank = { id: string; node: string; z0: Impedance; with?: string };

export type Machine = {
  id: string;
  node: string;
  kind: 'synchronous' | 'induction';
  kva: number;
  rPu?: number;
  /** Saturated subtransient reactance; of an induction machine the locked-rotor reactance. */
  xSubtransientPu: number;
  x2Pu?: number;
  x0Pu?: number;
  neutral?: Neutral;
  /** The most it may send out, where the agreement limits that. */
  exportKw?: number;
};

export type Inverter = {
  id: string;
  node: string;
  phases: Phases;
  kva: number;
  faultCurrentPu: number;
  faultAngleDeg?: number;
  exportKw?: number;
  powerFactor?: number;
  tracking?: boolean;
  storage?: boolean;
  listed?: boolean;
};

export type Load = {
  id: string;
  node: string;
  phases: Phases;
  kw: number;
  kvar: number;
  minimumKw?: number;
  with?: string;
};

/** A protective device at one end of a line or transformer. */
export type Device = {
  id: string;
  branch: string;
  end: 'from' | 'to';
  /** "breaker", "recloser", "fuse", "sectionalizer" or what the utility calls it. */
  kind: string;
  /** Symmetrical interrupting rating. */
  interruptingKa?: number;
  circuit?: string;
  phasePickupA?: number;
  groundPickupA?: number;
  testXr?: number;
  ratingBasis?: string;
  /** Opens by itself and so bounds a line section; unless said, breakers and reclosers do. */
  sectionalizing?: boolean;
  deadTimeS?: number;
};

/** All that lies beyond `device`, seen from the source. */
export type Section = {
  id: string;
  device: string;
  peakKw?: number;
  minimumKw?: number;
  daytimeFixedKw?: number;
  daytimeTrackingKw?: number;
};

/** What is known of a feeder of the model; lines and devices name it in `circuit`. */
export type Circuit = { id: string; lineType?: 'three-wire' | 'four-wire' };

export type ElementLists = {
  sources?: Source[];
  lines?: Line[];
  transformers?: Transformer[];
  switches?: Switch[];
  groundingBanks?: GroundingBank[];
  machines?: Machine[];
  inverters?: Inverter[];
  loads?: Load[];
  devices?: Device[];
};

export type Feeder = ElementLists & { nodes: Node[]; sections?: Section[]; circuits?: Circuit[] };

/** The project in question: its point of interconnection is a node of the feeder; its lists join in state `after`. */
export type Project = ElementLists & { id: string; node: string; nodes?: Node[] };

export type Study = {
  format: typeof studyFormat;
  name?: string;
  frequencyHz: number;
  baseMva: number;
  prefaultFactor: { max: number; min: number };
  /** Resistance of the line-to-ground fault of state `minimum`. */
  minimumFaultOhm?: number;
  /** "prefault": every source and machine at one voltage before the fault. */
  options?: { method?: 'prefault' };
  feeder: Feeder;
  project?: Project;
};
