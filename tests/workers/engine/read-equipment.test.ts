import { describe, expect, it } from 'vitest';
import type { Change } from './spoiling.ts';
import { linesOf } from './spoiling.ts';

/* What a study file says of equipment beyond fault currents: each problem has its place, and one problem makes one line. */

const set = (pointer: string, value: unknown): Change => ({ set: { [pointer]: value } });
const solar = '/feeder/inverters/0';
const curve = (value: unknown) => set('/feeder/devices/0/phaseCurve', value);
const fuse = (minimumMelt: unknown) =>
  curve({
    kind: 'fuse',
    minimumMelt,
    totalClear: [
      [1, 2],
      [3, 1],
    ],
  });
const curveKinds =
  '"ieee-moderately-inverse" or "ieee-very-inverse" or "ieee-extremely-inverse" or "iec-standard-inverse" or "iec-very-inverse" or "iec-extremely-inverse" or "definite-time" or "fuse"';

const values: [kind: string, Change, line: string][] = [
  [
    'a curve of no kind',
    curve({ kind: 'slow', pickupA: 1, timeDial: 1 }),
    `/feeder/devices/0/phaseCurve/kind: got "slow", expected ${curveKinds}`,
  ],
  ['a curve that is a text', curve('fast'), '/feeder/devices/0/phaseCurve: got "fast", expected an object'],
  [
    "an inverse curve with a definite-time curve's field",
    curve({ kind: 'iec-very-inverse', pickupA: 1, timeDial: 1, timeS: 1 }),
    '/feeder/devices/0/phaseCurve/timeS: got 1, expected no such field (known: kind, pickupA, timeDial, instantaneousA, instantaneousS)',
  ],
  [
    'a fuse with currents that fall',
    fuse([
      [10, 5],
      [8, 4],
    ]),
    '/feeder/devices/0/phaseCurve/minimumMelt/1/0: got 8, expected a number above 10: the pairs rise',
  ],
  [
    'a fuse with one point',
    fuse([[10, 5]]),
    '/feeder/devices/0/phaseCurve/minimumMelt: got a list of 1, expected a list of at least 2 pairs',
  ],
  [
    'a fuse with a point of three numbers',
    fuse([
      [10, 5],
      [12, 4, 3],
    ]),
    '/feeder/devices/0/phaseCurve/minimumMelt/1: got a list of 3, expected a list of two numbers',
  ],
  [
    'a fuse that takes no time',
    fuse([
      [10, 5],
      [12, 0],
    ]),
    '/feeder/devices/0/phaseCurve/minimumMelt/1/1: got 0, expected a number above 0',
  ],
  [
    'vars against a voltage that stays',
    set(`${solar}/voltVar`, [
      [0.98, 0],
      [0.98, 0.1],
    ]),
    `${solar}/voltVar/1/0: got 0.98, expected a number above 0.98: the pairs rise`,
  ],
  [
    'more vars than the inverter has',
    set(`${solar}/voltVar`, [
      [0.9, 1.2],
      [1, 0],
    ]),
    `${solar}/voltVar/0/1: got 1.2, expected a number from -1 to 1`,
  ],
  [
    'a grid-forming unit that says too little',
    set(`${solar}/gridForming`, true),
    `${solar}/gridForming: got true, expected "unknown" or impedances`,
  ],
  [
    'a grid-forming unit without impedance',
    set(`${solar}/gridForming`, { z1: { r: 0, x: 0 } }),
    `${solar}/gridForming/z1: got zero impedance, expected an impedance other than zero`,
  ],
  [
    'a category that IEEE 1547 does not have',
    set(`${solar}/listing`, { category: 'IV' }),
    `${solar}/listing/category: got "IV", expected "I" or "II" or "III"`,
  ],
  [
    'a load in delta on one phase',
    set('/feeder/loads/0/connection', 'delta'),
    '/feeder/loads/0/connection: got "delta", expected "wye" in a load with one phase',
  ],
  [
    'a capacitor that hunts',
    set('/feeder/capacitors/0/switchedByVoltage', [1.04, 0.98]),
    '/feeder/capacitors/0/switchedByVoltage/1: got 0.98, expected a number above 1.04',
  ],
  [
    'a regulator with half a step',
    set('/feeder/regulators/0/steps', 0.5),
    '/feeder/regulators/0/steps: got 0.5, expected a whole number of 1 or more',
  ],
  [
    'a share above all',
    set('/feeder/sections/0/groundedLoadShare', 1.2),
    '/feeder/sections/0/groundedLoadShare: got 1.2, expected a number from 0 to 1',
  ],
  [
    'a secondary network without a node',
    set('/feeder/secondaryNetworks/0/nodes', []),
    '/feeder/secondaryNetworks/0/nodes: got a list of 0, expected a list of at least 1',
  ],
];

describe('What a study says of equipment', () => {
  it.each(values)('is refused where it is wrong: %s', (_, change, expected) => {
    expect(linesOf(change)).toBe(expected);
  });

  it.each([
    ['nothing beyond the sound file', {}],
    [
      'every further field of a section',
      {
        set: {
          '/feeder/sections/0': {
            ...{
              id: 's',
              device: 'cb',
              minimumIs: 'net',
              netOf: ['solar', 'genset'],
              groundedLoadShare: 0.8,
            },
            ...{ largestCustomerShare: 0.4, uniform: true, transfers: false },
          },
        },
      },
    ],
    ['a mainline', set('/feeder/lines/0/mainline', true)],
    ['a circuit that the rules apply to', set('/feeder/circuits/0/subjectToRules', true)],
    [
      'a fuse',
      fuse([
        [10, 5],
        [12, 4],
      ]),
    ],
    ['a unit that nobody can say much of', set(`${solar}/gridForming`, 'unknown')],
    [
      'a listing',
      set(`${solar}/listing`, {
        standard: 'UL 1741',
        category: 'II',
        profile: 'as delivered',
        trdPercent: 3,
        loadRejectionPercent: 120,
        antiIslanding: true,
      }),
    ],
    [
      'what an inverter and a machine run on',
      {
        set: {
          [`${solar}/energy`]: 'wind',
          '/feeder/machines/0/storage': false,
          '/feeder/machines/0/powerFactor': -0.95,
        },
      },
    ],
    [
      'loads as they follow the voltage',
      { set: { '/feeder/loads/0/model': 'impedance', '/feeder/loads/0/customer': 'mill' } },
    ],
    [
      'a source that holds more than nominal',
      { set: { '/feeder/sources/0/peakVoltagePu': 1.03, '/feeder/sources/0/minimumVoltagePu': 1.01 } },
    ],
    [
      "a device's further ratings",
      {
        set: {
          '/feeder/devices/1/ratedKv': 15.5,
          '/feeder/devices/1/faultClosingKa': 10,
          '/feeder/devices/1/directional': true,
          '/feeder/devices/1/voltageSupervised': false,
        },
      },
    ],
    [
      "a project's own capacitor at the feeder",
      set('/project/capacitors', [{ id: 'own', node: 'bus', phases: 'ABC', kvar: 300, with: 'plant' }]),
    ],
    ['a capacitor out of service', { set: { '/feeder/scenarios': [{ id: 'x', out: ['caps'] }] } }],
  ] satisfies [string, Change][])('is accepted where it is right: %s', (_, change) => {
    expect(linesOf(change)).toBe('');
  });
});
