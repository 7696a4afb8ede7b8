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
  /** Both or neither: a line without them names its construction. */
  z1?: Impedance;
  z0?: Impedance;
  construction?: string;
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
  /** Of a power station unit: the machine that this transformer steps up. Only method "iec60909" asks, as below. */
  unitMachine?: string;
  onLoadTapChanger?: boolean;
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
  /** Rated voltage where it is not the node's, and rated power factor; only method "iec60909" asks. */
  ratedKv?: number;
  ratedPowerFactor?: number;
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
  /** What part of its kVA is motors, and their locked-rotor reactance, 1/6 unless given; see `options.motorLoad`. */
  motorFraction?: number;
  motorLockedRotorPu?: number;
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
  /** X/R that the rating was tested at; unless given, the lowest standard value for the kind. */
  testXr?: number;
  /** "asymmetrical" where the rating counts the direct current in; else it is symmetrical. */
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

/**
 * A way to run the feeder besides the one that the lists describe: a bus tie closed, the alternate feed in. Fault currents
 * are computed for each, and the worst of all decides; both name elements of the feeder, not of a project.
 */
export type Scenario = {
  id: string;
  /** What findings and warnings call it, the id where there is none. */
  name?: string;
  /** By id of a switch: whether it is closed. The others are as the list has them. */
  switches?: Record<string, boolean>;
  /** Ids of what is out of service: of a node with all that meets it, of any other element with nothing else. */
  out?: string[];
};

/** Resistance, geometric mean radius and diameter, in metric units or in US ones. */
export type BareConductor =
  | { ohmPerKm: number; gmrM: number; diameterM: number }
  | { ohmPerMile: number; gmrFt: number; diameterIn: number };

export type Conductor = { id: string } & BareConductor;

/** A core with strands around it, all alike; the outside diameter is that over the strands. */
export type ConcentricCable = {
  id: string;
  kind: 'concentric';
  core: BareConductor;
  strands: number;
  strand: BareConductor;
} & ({ outsideDiameterM: number } | { outsideDiameterIn: number });

/** A core with a copper tape around it; the diameter is that over the tape, a mil is a thousandth of an inch. */
export type TapeCable = { id: string; kind: 'tape'; core: BareConductor } & (
  { shieldDiameterM: number; tapeThicknessM: number } | { shieldDiameterIn: number; tapeThicknessMil: number }
);

export type Cable = ConcentricCable | TapeCable;

/** Where a conductor or a cable hangs or lies: x across, y up from the ground. N is earthed all along. */
export type Place = { phase: 'A' | 'B' | 'C' | 'N'; conductor?: string; cable?: string } & (
  { xM: number; yM: number } | { xFt: number; yFt: number }
);

/** What a line is built from; the resistivity of the earth is in ohm-metres. */
export type Construction = { id: string; earthOhmM: number; places: Place[] };

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

export type Feeder = ElementLists & {
  nodes: Node[];
  sections?: Section[];
  circuits?: Circuit[];
  scenarios?: Scenario[];
  conductors?: Conductor[];
  cables?: Cable[];
  constructions?: Construction[];
};

/** The project in question: its point of interconnection is a node of the feeder; its lists join in state `after`. */
export type Project = ElementLists & { id: string; node: string; nodes?: Node[] };

export type StudyOptions = {
  /** "prefault", the default: every source and machine at one voltage before the fault. "iec60909": IEC 60909-0. */
  method?: 'prefault' | 'iec60909';
  /** How far low voltage may be off in service, which sets the voltage factors of "iec60909" there; 10 unless given. */
  lowVoltageTolerancePercent?: 6 | 10;
  /** Whether the duty of devices counts the first-cycle current of motors in the load. */
  motorLoad?: boolean;
};

export type Study = {
  format: typeof studyFormat;
  name?: string;
  frequencyHz: number;
  baseMva: number;
  prefaultFactor: { max: number; min: number };
  /** Resistance of the line-to-ground fault of state `minimum`. */
  minimumFaultOhm?: number;
  options?: StudyOptions;
  feeder: Feeder;
  project?: Project;
};
