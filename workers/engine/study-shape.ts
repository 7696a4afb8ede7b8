import type { Impedance, Machine } from '../../shared/schemas/study.ts';
import { studyFormat } from '../../shared/schemas/study.ts';
import type { Check } from './shape.ts';
import {
  between,
  describeValue,
  expect,
  listOf,
  matching,
  name,
  notNegative,
  number,
  object,
  oneOf,
  pointerOf,
  positive,
  text,
  truth,
} from './shape.ts';

/* The study file's shape: which fields, of which kind, within which bounds. What joins elements is checked elsewhere. */

const phases = expect('phases out of A, B and C, each at most once', (value) => {
  return typeof value === 'string' && /^[ABC]{1,3}$/.test(value) && new Set(value).size === value.length;
});

const notZero: Check = (value, place, problems) => {
  const { r, x } = value as Impedance;
  if (r !== 0 || x !== 0) return;
  problems.push({
    pointer: pointerOf(place),
    got: 'zero impedance',
    expected: 'an impedance other than zero',
  });
};

/** Of a line: the reactance may be negative (star equivalents, series capacitors), the resistance not. */
const lineImpedance = object({ r: notNegative, x: number }, {}, notZero);
const impedance = object({ r: notNegative, x: notNegative }, {}, notZero);
const neutralImpedance = object({ r: notNegative, x: notNegative });

const neutral: Check = (value, place, problems) => {
  if (value === 'solid' || value === 'ungrounded') return;
  if (typeof value === 'object' && value !== null) neutralImpedance(value, place, problems);
  else {
    const expected = '"solid", "ungrounded" or an impedance';
    problems.push({ pointer: pointerOf(place), got: describeValue(value), expected });
  }
};

/** Star to star and delta to delta keep the clock at 0; a star on one side alone turns it to 1 or 11. */
const connection = matching(
  /^((YN|Y)(yn|y)0|Dd0|(YN|Y)d(1|11)|D(yn|y)(1|11))$/,
  'a connection such as "Dyn1", "YNd11", "YNyn0" or "Dd0"',
);

const strength = object({ z1: impedance }, { z2: impedance, z0: impedance });

const neutralOfMachine: Check = (value, place, problems) => {
  const machine = value as Machine;
  const note = (key: string, expected: string) =>
    problems.push({
      pointer: pointerOf({ parent: place, key }),
      got: describeValue(machine[key as keyof Machine]),
      expected,
    });
  if (machine.kind === 'induction') {
    if ((machine.neutral ?? 'ungrounded') !== 'ungrounded')
      note('neutral', 'an induction machine to be "ungrounded"');
    return;
  }
  if (machine.neutral === undefined) note('neutral', 'the neutral of a synchronous machine');
  else if (machine.neutral !== 'ungrounded' && machine.x0Pu === undefined) {
    note('x0Pu', 'the zero-sequence reactance, since the neutral is grounded');
  }
};

const companion = { with: name };
const circuit = { circuit: name };

const node = object(
  { id: name, kv: positive, phases },
  { position: pair(between(-180, 180), between(-90, 90)), ...companion },
);

const elementLists = {
  sources: listOf(object({ id: name, node: name, max: strength }, { min: strength })),
  lines: listOf(
    object(
      { id: name, from: name, to: name, phases, km: positive, z1: lineImpedance, z0: lineImpedance },
      { ampacityA: positive, ...circuit, ...companion },
    ),
  ),
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
      { rPu: notNegative, x2Pu: positive, x0Pu: positive, neutral, exportKw: notNegative },
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
      { minimumKw: notNegative, ...companion },
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
    sections: listOf(object({ id: name, device: name }, loadFigures)),
    circuits: listOf(object({ id: name }, { lineType: oneOf('three-wire', 'four-wire') })),
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
  { name: text, minimumFaultOhm: notNegative, project, options: object({}, { method: oneOf('prefault') }) },
);

/** A pair such as [lng, lat]. */
function pair(first: Check, second: Check): Check {
  return (value, place, problems) => {
    if (!Array.isArray(value) || value.length !== 2) {
      problems.push({
        pointer: pointerOf(place),
        got: describeValue(value),
        expected: 'a list of two numbers',
      });
      return;
    }
    first(value[0], { parent: place, key: 0 }, problems);
    second(value[1], { parent: place, key: 1 }, problems);
  };
}
