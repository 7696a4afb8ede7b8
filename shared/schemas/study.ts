import type {
  Capacitor,
  Circuit,
  Listing,
  Regulator,
  SecondaryNetwork,
  Section,
  ServiceTie,
  ServiceTransformer,
  Substation,
  TimeCurve,
} from './study-utility.ts';

/*
 * The study file, format feederwright.study/1: a network model as it stands for one run, and the project in question. Impedances
 * are in ohms (per km in lines), voltages in kV line to line, lengths in km, ratings in kVA or kA. A missing list is an empty one.
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

export type Source = {
  id: string;
  node: string;
  max: SourceStrength;
  min?: SourceStrength;
  /** Voltage that the source holds in a load flow, over nominal: at peak load and at minimum load; 1 unless given. */
  peakVoltagePu?: number;
  minimumVoltagePu?: number;
};

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
  /** Part of the three-phase backbone that leaves the substation. */
  mainline?: boolean;
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
  /** In a load flow: positive sends vars into the grid, negative takes them; 1 unless given. */
  powerFactor?: number;
  storage?: boolean;
  listing?: Listing;
  service?: ServiceTie;
};

export type Inverter = {
  id: string;
  node: string;
  phases: Phases;
  kva: number;
  faultCurrentPu: number;
  faultAngleDeg?: number;
  /** Rated voltage, line to line; of a one-phase unit line to neutral times √3: 0.416 of one for 240 V. */
  ratedKv?: number;
  exportKw?: number;
  powerFactor?: number;
  tracking?: boolean;
  storage?: boolean;
  listed?: boolean;
  /** What it makes power from; photovoltaic alone has daytime minimum load. */
  energy?: 'photovoltaic' | 'storage' | 'wind' | 'other';
  /** Vars against voltage: pairs of voltage over nominal and vars over kva (positive into the grid), by rising voltage. */
  voltVar?: [volts: number, vars: number][];
  /** A unit that can hold voltage by itself is a voltage source with these; "unknown" where nobody says. */
  gridForming?: { z1: Impedance; z2?: Impedance; z0?: Impedance } | 'unknown';
  listing?: Listing;
  service?: ServiceTie;
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
  /** How it is tied: "wye" to the earthed neutral (the default), "delta" between phases. */
  connection?: 'wye' | 'delta';
  /** How its power follows the voltage in a load flow: constant "power" (the default), "current" or "impedance". */
  model?: 'power' | 'current' | 'impedance';
  /** One customer so large that the section's minimum hangs on it. */
  customer?: string;
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
  /** Shortest time open before it closes again; 0 where it does not reclose. */
  deadTimeS?: number;
  /** Whether closing waits for a dead line, or is done only in step with it. */
  voltageSupervised?: boolean;
  /** Trips only for current that leaves the substation. */
  directional?: boolean;
  ratedKv?: number;
  /** Of switches and elbows: the fault current that they may be closed on. */
  faultClosingKa?: number;
  /** Tripping times. */
  phaseCurve?: TimeCurve;
  groundCurve?: TimeCurve;
};

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
  capacitors?: Capacitor[];
};

export type Feeder = ElementLists & {
  nodes: Node[];
  sections?: Section[];
  circuits?: Circuit[];
  substations?: Substation[];
  serviceTransformers?: ServiceTransformer[];
  secondaryNetworks?: SecondaryNetwork[];
  regulators?: Regulator[];
  scenarios?: Scenario[];
  conductors?: Conductor[];
  cables?: Cable[];
  constructions?: Construction[];
};

/** The project in question: its point of interconnection is a node of the feeder; its lists join in state `after`. */
export type Project = ElementLists & {
  id: string;
  node: string;
  nodes?: Node[];
  /** Interrupting rating of the customer's main panel. */
  panelInterruptingKa?: number;
};

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
