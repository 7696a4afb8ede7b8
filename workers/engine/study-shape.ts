import type { Impedance, Load, Machine } from '../../shared/schemas/study.ts';
import { studyFormat } from '../../shared/schemas/study.ts';
import { constructionLists, impedanceOrConstruction } from './line-shape.ts';
import { scenario } from './scenario-shape.ts';
import type { Check } from './shape.ts';
import {
  between,
  check,
  checkByNotes,
  expect,
  listOf,
  matching,
  name,
  notNegative,
  noteProblem,
  number,
  object,
  oneOf,
  pointerOf,
  positive,
  text,
  truth,
} from './shape.ts';

/* The study file's shape: which fields, of which kind, within which bounds. What joins elements is checked elsewhere. */

const phaseTexts = new Set(
  ['A', 'B', 'C', 'AB', 'BA', 'BC', 'CB', 'CA', 'AC'].concat(['ABC', 'ACB', 'BAC', 'BCA', 'CAB', 'CBA']),
);
const phases = expect('phases out of A, B and C, each at most once', (value) =>
  phaseTexts.has(value as string),
);

/** In ohms, or ohms per km: what is smaller was left over by a subtraction. */
const smallestImpedance = 1e-12;

const notZero = check(
  (value) => {
    const { r, x } = value as Impedance;
    return r >= smallestImpedance || Math.abs(x) >= smallestImpedance;
  },
  (value, place, problems) => {
    if (notZero.accepts(value)) return;
    problems.add(() => ({
      pointer: pointerOf(place),
      got: 'zero impedance',
      expected: 'an impedance other than zero',
    }));
  },
);

/** Of a line: the reactance may be negative (star equivalents, series capacitors), the resistance not. */
const lineImpedance = object({ r: notNegative, x: number }, {}, notZero);
const impedance = object({ r: notNegative, x: notNegative }, {}, notZero);
const neutralImpedance = object({ r: notNegative, x: notNegative });

const neutral = checkByNotes((value, place, problems) => {
  if (value === 'solid' || value === 'ungrounded') return;
  if (typeof value === 'object' && value !== null) neutralImpedance(value, place, problems);
  else noteProblem(problems, place, value, '"solid", "ungrounded" or an impedance');
});

/** Star to star and delta to delta keep the clock at 0; a star on one side alone turns it to 1 or 11. */
const connection = matching(
  /^((YN|Y)(yn|y)0|Dd0|(YN|Y)d(1|11)|D(yn|y)(1|11))$/,
  'a connection such as "Dyn1", "YNd11", "YNyn0" or "Dd0"',
);

const strength = object({ z1: impedance }, { z2: impedance, z0: impedance });

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

/** Motors are three-phase machines. */
const motorsOfLoad = check(
  (value) => {
    const { motorFraction, phases: there } = value as Load;
    return !motorFraction || there.length === 3;
  },
  (value, place, problems) => {
    if (motorsOfLoad.accepts(value)) return;
    const { motorFraction } = value as Load;
    const expected = 'no motors in a load without three phases';
    noteProblem(problems, { parent: place, key: 'motorFraction' }, motorFraction, expected);
  },
);

const options = object(
  {},
  {
    method: oneOf('prefault', 'iec60909'),
    lowVoltageTolerancePercent: expect('6 or 10', (value) => value === 6 || value === 10),
    motorLoad: truth,
  },
);

const companion = { with: name };
const circuit = { circuit: name };

const node = object(
  { id: name, kv: positive, phases },
  { position: pair(between(-180, 180), between(-90, 90)), ...companion },
);

const lineFields = object(
  { id: name, from: name, to: name, phases, km: positive },
  { z1: lineImpedance, z0: lineImpedance, construction: name, ampacityA: positive, ...circuit, ...companion },
);

const line = check(
  (value) => lineFields.accepts(value) && impedanceOrConstruction.accepts(value),
  (value, place, problems) => {
    lineFields(value, place, problems);
    impedanceOrConstruction(value, place, problems);
  },
);

const elementLists = {
  sources: listOf(object({ id: name, node: name, max: strength }, { min: strength })),
  lines: listOf(line),
  transformers: listOf(
    object(
      {
        id: name,
        from: name,
        to: name,
        kva: positive,
        connection,
        impedancePercent: positive,
        xr: notNegative,
      },
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
    ),
  ),
  switches: listOf(object({ id: name, from: name, to: name, closed: truth }, { ...circuit, ...companion })),
  groundingBanks: listOf(object({ id: name, node: name, z0: impedance }, companion)),
  machines: listOf(
    object(
      {
        id: name,
        node: name,
        kind: oneOf('synchronous', 'induction'),
        kva: positive,
        xSubtransientPu: positive,
      },
      {
        rPu: notNegative,
        x2Pu: positive,
        x0Pu: positive,
        neutral,
        ratedKv: positive,
        ratedPowerFactor: between(0, 1),
        exportKw: notNegative,
      },
      neutralOfMachine,
    ),
  ),
  inverters: listOf(
    object(
      { id: name, node: name, phases, kva: positive, faultCurrentPu: notNegative },
      {
        faultAngleDeg: number,
        exportKw: notNegative,
        powerFactor: between(-1, 1),
        tracking: truth,
        storage: truth,
        listed: truth,
      },
    ),
  ),
  loads: listOf(
    object(
      { id: name, node: name, phases, kw: notNegative, kvar: number },
      {
        minimumKw: notNegative,
        motorFraction: between(0, 1),
        motorLockedRotorPu: positive,
        ...companion,
      },
      motorsOfLoad,
    ),
  ),
  devices: listOf(
    object(
      { id: name, branch: name, end: oneOf('from', 'to'), kind: name },
      {
        interruptingKa: positive,
        phasePickupA: positive,
        groundPickupA: positive,
        testXr: positive,
        ratingBasis: name,
        sectionalizing: truth,
        deadTimeS: notNegative,
        ...circuit,
      },
    ),
  ),
};

const loadFigures = {
  peakKw: notNegative,
  minimumKw: notNegative,
  daytimeFixedKw: notNegative,
  daytimeTrackingKw: notNegative,
};

const feeder = object(
  { nodes: listOf(node, 1) },
  {
    ...elementLists,
    ...constructionLists,
    sections: listOf(object({ id: name, device: name }, loadFigures)),
    circuits: listOf(object({ id: name }, { lineType: oneOf('three-wire', 'four-wire') })),
    scenarios: listOf(scenario),
  },
);

const project = object({ id: name, node: name }, { nodes: listOf(node), ...elementLists });

/** Checks the whole file but for what one element says of another. */
export const checkStudyShape = object(
  {
    format: oneOf(studyFormat),
    frequencyHz: positive,
    baseMva: positive,
    prefaultFactor: object({ max: positive, min: positive }),
    feeder,
  },
  { name: text, minimumFaultOhm: notNegative, project, options },
);

/** A pair such as [lng, lat]. */
function pair(first: Check, second: Check): Check {
  const isPair = (value: unknown): value is unknown[] => Array.isArray(value) && value.length === 2;
  const accepts = (value: unknown) => isPair(value) && first.accepts(value[0]) && second.accepts(value[1]);
  return check(accepts, (value, place, problems) => {
    if (!isPair(value)) return noteProblem(problems, place, value, 'a list of two numbers');
    first(value[0], { parent: place, key: 0 }, problems);
    second(value[1], { parent: place, key: 1 }, problems);
  });
}
