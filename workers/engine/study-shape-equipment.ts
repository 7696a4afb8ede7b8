import type { Load, Machine } from '../../shared/schemas/study.ts';
import { impedanceOrConstruction } from './line-shape.ts';
import {
  anyImpedance,
  connection,
  impedance,
  lineImpedance,
  neutral,
  pair,
  phases,
  risingPairs,
} from './shape-electrical.ts';
import {
  between,
  check,
  checkByNotes,
  listOf,
  name,
  notNegative,
  noteProblem,
  number,
  object,
  oneOf,
  positive,
  text,
  truth,
} from './shape.ts';
import { timeCurve } from './study-shape-curves.ts';

/* The shape of what both a feeder and a project have: nodes and the elements at and between them. */

const companion = { with: name };
const circuit = { circuit: name };

export const node = object(
  { id: name, kv: positive, phases },
  { position: pair(between(-180, 180), between(-90, 90)), ...companion },
);

const strength = object({ z1: impedance }, { z2: impedance, z0: impedance });

const lineFields = object(
  { id: name, from: name, to: name, phases, km: positive },
  {
    z1: lineImpedance,
    z0: lineImpedance,
    construction: name,
    ampacityA: positive,
    mainline: truth,
    ...circuit,
    ...companion,
  },
);

const line = check(
  (value) => lineFields.accepts(value) && impedanceOrConstruction.accepts(value),
  (value, place, problems) => {
    lineFields(value, place, problems);
    impedanceOrConstruction(value, place, problems);
  },
);

const transformer = object(
  { id: name, from: name, to: name, kva: positive, connection, impedancePercent: positive, xr: notNegative },
  {
    zeroImpedancePercent: positive,
    ratedKvTo: positive,
    neutralFrom: neutral,
    neutralTo: neutral,
    unitMachine: name,
    onLoadTapChanger: truth,
    ...circuit,
    ...companion,
  },
);

const listing = object(
  {},
  {
    standard: name,
    category: oneOf('I', 'II', 'III'),
    profile: name,
    trdPercent: notNegative,
    loadRejectionPercent: positive,
    antiIslanding: truth,
  },
);

const service = object(
  { transformer: name },
  { firstHalfKw: notNegative, secondHalfKw: notNegative, drop: anyImpedance, panelInterruptingKa: positive },
);

/** What machines and inverters may both say. */
const generation = {
  exportKw: notNegative,
  powerFactor: between(-1, 1),
  storage: truth,
  listing,
  service,
};

const neutralOfMachine = checkByNotes((value, place, problems) => {
  const machine = value as Machine;
  const note = (key: 'neutral' | 'x0Pu', expected: string) =>
    noteProblem(problems, { parent: place, key }, machine[key], expected);
  if (machine.kind === 'induction') {
    if ((machine.neutral ?? 'ungrounded') !== 'ungrounded')
      note('neutral', 'an induction machine to be "ungrounded"');
    return;
  }
  if (machine.neutral === undefined) note('neutral', 'the neutral of a synchronous machine');
  else if (machine.neutral !== 'ungrounded' && machine.x0Pu === undefined) {
    note('x0Pu', 'the zero-sequence reactance, since the neutral is grounded');
  }
});

const machine = object(
  { id: name, node: name, kind: oneOf('synchronous', 'induction'), kva: positive, xSubtransientPu: positive },
  {
    rPu: notNegative,
    x2Pu: positive,
    x0Pu: positive,
    neutral,
    ratedKv: positive,
    ratedPowerFactor: between(0, 1),
    ...generation,
  },
  neutralOfMachine,
);

const voltageSource = object({ z1: impedance }, { z2: impedance, z0: impedance });
const gridForming = check(
  (value) => value === 'unknown' || voltageSource.accepts(value),
  (value, place, problems) => {
    if (value === 'unknown') return;
    if (typeof value === 'object' && value !== null) voltageSource(value, place, problems);
    else noteProblem(problems, place, value, '"unknown" or impedances');
  },
);

const inverter = object(
  { id: name, node: name, phases, kva: positive, faultCurrentPu: notNegative },
  {
    faultAngleDeg: number,
    ratedKv: positive,
    tracking: truth,
    listed: truth,
    energy: oneOf('photovoltaic', 'storage', 'wind', 'other'),
    voltVar: risingPairs(positive, between(-1, 1)),
    gridForming,
    ...generation,
  },
);

/** Motors are three-phase machines, and what is tied between phases needs two of them. */
const phasesOfLoad = check(
  (value) => {
    const { motorFraction, phases: there, connection: tie } = value as Load;
    return (!motorFraction || there.length === 3) && (tie !== 'delta' || there.length > 1);
  },
  (value, place, problems) => {
    const { motorFraction, phases: there, connection: tie } = value as Load;
    if (motorFraction && there.length !== 3) {
      const expected = 'no motors in a load without three phases';
      noteProblem(problems, { parent: place, key: 'motorFraction' }, motorFraction, expected);
    }
    if (tie === 'delta' && there.length < 2) {
      noteProblem(problems, { parent: place, key: 'connection' }, tie, '"wye" in a load with one phase');
    }
  },
);

const load = object(
  { id: name, node: name, phases, kw: notNegative, kvar: number },
  {
    minimumKw: notNegative,
    motorFraction: between(0, 1),
    motorLockedRotorPu: positive,
    connection: oneOf('wye', 'delta'),
    model: oneOf('power', 'current', 'impedance'),
    customer: text,
    ...companion,
  },
  phasesOfLoad,
);

const device = object(
  { id: name, branch: name, end: oneOf('from', 'to'), kind: name },
  {
    interruptingKa: positive,
    phasePickupA: positive,
    groundPickupA: positive,
    testXr: positive,
    ratingBasis: name,
    sectionalizing: truth,
    deadTimeS: notNegative,
    voltageSupervised: truth,
    directional: truth,
    ratedKv: positive,
    faultClosingKa: positive,
    phaseCurve: timeCurve,
    groundCurve: timeCurve,
    ...circuit,
  },
);

const switchedAt = pair(positive, positive);

/** Off above a higher voltage than the one that it is switched on below, or it would hunt. */
const hysteresis = check(
  (value) => switchedAt.accepts(value) && (value as [number, number])[0] < (value as [number, number])[1],
  (value, place, problems) => {
    const before = problems.length;
    switchedAt(value, place, problems);
    if (problems.length > before) return;
    const [on, off] = value as [number, number];
    if (on >= off) noteProblem(problems, { parent: place, key: 1 }, off, `a number above ${on}`);
  },
);
const capacitor = object(
  { id: name, node: name, phases, kvar: positive },
  { switchedByVoltage: hysteresis, ...companion },
);

export const elementLists = {
  sources: listOf(
    object(
      { id: name, node: name, max: strength },
      { min: strength, peakVoltagePu: positive, minimumVoltagePu: positive },
    ),
  ),
  lines: listOf(line),
  transformers: listOf(transformer),
  switches: listOf(object({ id: name, from: name, to: name, closed: truth }, { ...circuit, ...companion })),
  groundingBanks: listOf(object({ id: name, node: name, z0: impedance }, companion)),
  machines: listOf(machine),
  inverters: listOf(inverter),
  loads: listOf(load),
  devices: listOf(device),
  capacitors: listOf(capacitor),
};
