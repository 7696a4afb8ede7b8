import { describe, expect, it } from 'vitest';
import type { Change } from './spoiling.ts';
import { linesOf } from './spoiling.ts';

/* Every kind of problem that a study file can have, with the line that it gets: one problem makes one line. */

const z = (r: number, x: number) => ({ r, x });
const line = (id: string, from: string, to: string, phases: string) => {
  return { id, from, to, phases, km: 1, z1: z(0.3, 0.4), z0: z(0.6, 1.2) };
};
const transformer = (id: string, from: string, connection: string) => {
  return { id, from, to: 'lv', kva: 1000, connection, impedancePercent: 5.75, xr: 7 };
};
const set = (pointer: string, value: unknown): Change => ({ set: { [pointer]: value } });

const cases: [kind: string, Change, line: string][] = [
  [
    'schema: a value of another kind',
    set('/feeder/nodes/2/kv', '12.47'),
    '/feeder/nodes/2/kv: got "12.47", expected a number above 0',
  ],
  [
    'schema: a field missing',
    { remove: ['/feeder/lines/0/km'] },
    '/feeder/lines/0/km: got nothing, expected a number above 0',
  ],
  [
    'schema: an unknown field',
    set('/feeder/switches/0/lenght', 1),
    '/feeder/switches/0/lenght: got 1, expected no such field (known: id, from, to, closed, circuit, with)',
  ],
  [
    'a duplicate id',
    set('/feeder/nodes/6', { id: 'mid', kv: 12.47, phases: 'ABC' }),
    '/feeder/nodes/6/id: got "mid", expected an id of its own (/feeder/nodes/2 has this one)',
  ],
  [
    "a project's id that the feeder has",
    set('/project/inverters/0/id', 'solar'),
    '/project/inverters/0/id: got "solar", expected an id of its own (/feeder/inverters/0 has this one)',
  ],
  [
    'a reference to nothing',
    set('/feeder/loads/0/node', 'nowhere'),
    '/feeder/loads/0/node: got "nowhere", expected the id of a node of this file',
  ],
  [
    "a feeder's reference to the project",
    set('/feeder/loads/0/node', 'lv'),
    '/feeder/loads/0/node: got "lv", expected the id of a node of the feeder',
  ],
  [
    'a device on nothing',
    set('/feeder/devices/1/branch', 'tie'),
    '/feeder/devices/1/branch: got "tie", expected the id of a line or transformer of this file',
  ],
  [
    'an element from a node to itself',
    set('/feeder/switches/0/to', 'bus'),
    '/feeder/switches/0/to: got "bus", expected another node than `from`',
  ],
  [
    'phases that the node lacks',
    set('/feeder/loads/0/phases', 'AB'),
    '/feeder/loads/0/node: got "leaf" with A, expected a node with phases AB',
  ],
  [
    'phases that the parent lacks',
    set('/feeder/nodes/5/phases', 'AB'),
    '/feeder/nodes/5/phases: got AB, expected phases that its supply has: A',
  ],
  [
    'a lateral loop',
    set('/feeder/lines/4', line('l5', 'pair', 'leaf', 'A')),
    '/feeder/lines/4: got a loop of laterals, expected laterals without loops',
  ],
  [
    'a lateral loop through a closed switch',
    set('/feeder/switches/0', { id: 'tie', from: 'end', to: 'leaf', closed: true }),
    '/feeder/switches/0: got a loop of laterals, expected laterals without loops',
  ],
  [
    'fewer than three phases within the core',
    set('/feeder/lines/4', line('l5', 'mid', 'end', 'AB')),
    '/feeder/lines/4: got fewer phases than the two three-phase nodes it joins, expected laterals without loops',
  ],
  [
    'a three-phase line to a lateral',
    set('/feeder/lines/3/phases', 'ABC'),
    '/feeder/lines/3/from: got "pair" with AB, expected a node with phases ABC\n/feeder/lines/3/to: got "leaf" with A, expected a node with phases ABC',
  ],
  [
    'a machine on a lateral',
    set('/feeder/machines/0/node', 'leaf'),
    '/feeder/machines/0/node: got "leaf" with A, expected a node with phases ABC',
  ],
  [
    'a source on a lateral',
    set('/feeder/sources/1', { id: 's2', node: 'pair', max: { z1: z(0, 1) } }),
    '/feeder/sources/1/node: got "pair" with AB, expected a node with phases ABC',
  ],
  [
    'a bank on a lateral',
    set('/feeder/groundingBanks/0/node', 'leaf'),
    '/feeder/groundingBanks/0/node: got "leaf" with A, expected a node with phases ABC',
  ],
  [
    'a transformer on a lateral',
    set('/feeder/transformers/1', { ...transformer('t', 'bus', 'Dyn1'), to: 'pair' }),
    '/feeder/transformers/1/to: got "pair" with AB, expected a node with phases ABC',
  ],
  [
    'kv that differs across a line',
    set('/feeder/lines/4', line('l5', 'grid', 'end', 'ABC')),
    '/feeder/lines/4: got 34.5 kV at one end and 12.47 kV at the other, expected one voltage',
  ],
  [
    'kv that differs across a closed switch',
    set('/feeder/switches/1', { id: 's', from: 'bus', to: 'grid', closed: true }),
    '/feeder/switches/1: got 12.47 kV at one end and 34.5 kV at the other, expected one voltage',
  ],
  [
    'an island',
    set('/feeder/nodes/6', { id: 'apart', kv: 12.47, phases: 'ABC' }),
    '/feeder/nodes/6: got an island with neither source nor machine, expected something that feeds it',
  ],
  [
    'an island of laterals behind an open switch',
    {
      set: {
        '/feeder/nodes/6': { id: 'stub', kv: 12.47, phases: 'A' },
        '/feeder/switches/1': { id: 'cut', from: 'leaf', to: 'stub', closed: false },
      },
    },
    '/feeder/nodes/6: got an island with neither source nor machine, expected something that feeds it',
  ],
  [
    'phase shifts that disagree around a loop',
    set('/project/transformers/1', transformer('up2', 'end', 'YNd1')),
    '/project/transformers/1: got a lag of 1 × 30° where the rest of its loop makes 11 × 30°, expected phase shifts that agree around the loop',
  ],
  [
    'a zero impedance of a line',
    set('/feeder/lines/0/z1', z(0, 0)),
    '/feeder/lines/0/z1: got zero impedance, expected an impedance other than zero',
  ],
  [
    'a zero impedance of a source',
    set('/feeder/sources/0/max/z0', z(0, 0)),
    '/feeder/sources/0/max/z0: got zero impedance, expected an impedance other than zero',
  ],
  [
    'a zero impedance of a transformer',
    set('/feeder/transformers/0/impedancePercent', 0),
    '/feeder/transformers/0/impedancePercent: got 0, expected a number above 0',
  ],
  [
    'a negative resistance',
    set('/feeder/lines/0/z0/r', -0.1),
    '/feeder/lines/0/z0/r: got -0.1, expected a number of 0 or more',
  ],
  [
    'a negative length',
    set('/feeder/lines/0/km', -1),
    '/feeder/lines/0/km: got -1, expected a number above 0',
  ],
  [
    'a negative rating of a transformer',
    set('/feeder/transformers/0/kva', -1),
    '/feeder/transformers/0/kva: got -1, expected a number above 0',
  ],
  [
    'a negative rating of a device',
    set('/feeder/devices/0/interruptingKa', -1),
    '/feeder/devices/0/interruptingKa: got -1, expected a number above 0',
  ],
  [
    'a number that is not finite',
    set('/feeder/lines/0/km', 1e999),
    '/feeder/lines/0/km: got Infinity, expected a number above 0',
  ],
  [
    'a number out of all bounds',
    set('/feeder/lines/0/km', 1e300),
    '/feeder/lines/0/km: got 1e+300, expected a number from 1e-15 to 1e+15',
  ],
];

describe('Each problem of a study file', () => {
  it.each(cases)('has its place, what is there and what was expected: %s', (_, change, expected) => {
    expect(linesOf(change)).toBe(expected);
  });

  it.each([
    ['a negative reactance of a line', set('/feeder/lines/0/z1/x', -0.4)],
    ['a closed switch between a line and a loop of three phases', set('/feeder/switches/0/closed', true)],
    ['two transformers side by side', set('/project/transformers/1', transformer('up2', 'end', 'YNd11'))],
    [
      'the same transformer the other way round',
      set('/project/transformers/1', { ...transformer('up2', 'lv', 'Dyn1'), to: 'end', from: 'lv' }),
    ],
    ['an id that elements of other kinds have', set('/feeder/loads/0/id', 'l1')],
    ["a project's element at a feeder's node", set('/project/inverters/0/node', 'bus')],
    ['an open switch between two voltages', set('/feeder/switches/0/to', 'grid')],
  ])('is none where a file is sound: %s', (_, change) => {
    expect(linesOf(change)).toBe('');
  });
});
