import { describe, expect, it } from 'vitest';
import type { Change } from './spoiling.ts';
import { linesOf } from './spoiling.ts';

/* What can be wrong with the operating cases of a study file, with the line that it gets. */

const z = (r: number, x: number) => ({ r, x });
const scenarios = (...list: object[]) => ({ '/feeder/scenarios': list });
const set = (...list: object[]): Change => ({ set: scenarios(...list) });
const tie = { id: 'tied', name: 'Tied', switches: { tie: true } };

/** The sound file with another switch, which is open, and one scenario that closes it. */
const withSwitch = (link: object, rest: object = {}): Change => ({
  set: {
    '/feeder/switches/1': { id: 'k', closed: false, ...link },
    ...scenarios({ id: 'closed', name: 'K closed', switches: { k: true }, ...rest }),
  },
});

/** A second way from the substation's high side to `end`, by a transformer of another clock hour behind an open switch. */
const shifted = {
  '/feeder/nodes/6': { id: 'other', kv: 12.47, phases: 'ABC' },
  '/feeder/transformers/1': {
    id: 'second',
    from: 'grid',
    to: 'other',
    kva: 5000,
    connection: 'YNyn0',
    impedancePercent: 7,
    xr: 10,
  },
  '/feeder/switches/1': { id: 'k', from: 'other', to: 'end', closed: false },
};

const cases: [kind: string, Change, line: string][] = [
  [
    'a list of another kind',
    { set: { '/feeder/scenarios': {} } },
    '/feeder/scenarios: got an object, expected a list',
  ],
  ['no id', set({ name: 'Tied' }), '/feeder/scenarios/0/id: got nothing, expected a text that is not empty'],
  [
    'an unknown field',
    set({ ...tie, closed: [] }),
    '/feeder/scenarios/0/closed: got a list of 0, expected no such field (known: id, name, switches, out)',
  ],
  [
    'a list of switches',
    set({ id: 'tied', switches: ['tie'] }),
    '/feeder/scenarios/0/switches: got a list of 1, expected an object',
  ],
  [
    'a switch that is neither',
    set({ id: 'tied', switches: { tie: 'closed' } }),
    '/feeder/scenarios/0/switches/tie: got "closed", expected true or false',
  ],
  [
    'an outage without a name',
    set({ id: 'gone', out: ['l1', ''] }),
    '/feeder/scenarios/0/out/1: got "", expected a text that is not empty',
  ],
  [
    'a duplicate id',
    set(tie, { id: 'other' }, tie),
    '/feeder/scenarios/2/id: got "tied", expected an id of its own (/feeder/scenarios/0 has this one)',
  ],
  [
    'an unknown switch',
    set({ id: 'tied', switches: { 'no/where': true } }),
    '/feeder/scenarios/0/switches/no~1where: got "no/where", expected the id of a switch of the feeder',
  ],
  [
    'a line as a switch',
    set({ id: 'tied', switches: { l1: true } }),
    '/feeder/scenarios/0/switches/l1: got "l1", expected the id of a switch of the feeder',
  ],
  [
    'an unknown outage',
    set(tie, { id: 'gone', out: ['l1', 'nowhere'] }),
    '/feeder/scenarios/1/out/1: got "nowhere", expected the id of one element of the feeder',
  ],
  [
    "an outage of the project's",
    set({ id: 'gone', out: ['plant'] }),
    '/feeder/scenarios/0/out/0: got "plant", expected the id of one element of the feeder',
  ],
  [
    'an outage that may be either of two elements',
    { set: { ...scenarios({ id: 'gone', out: ['l1'] }), '/feeder/loads/0/id': 'l1' } },
    '/feeder/scenarios/0/out/0: got "l1", the id of a load and a line, expected the id of one element of the feeder',
  ],
  [
    'a lateral loop',
    withSwitch({ from: 'end', to: 'leaf' }),
    '/feeder/scenarios/0: got a loop of laterals at /feeder/switches/1 in scenario "K closed", expected laterals without loops',
  ],
  [
    'a lateral fed by fewer phases than it has',
    withSwitch({ from: 'end', to: 'leaf' }, { out: ['l3'] }),
    '/feeder/scenarios/0: got AB at /feeder/nodes/4/phases in scenario "K closed", expected phases that its supply has: A',
  ],
  [
    'two voltages',
    withSwitch({ from: 'grid', to: 'end' }),
    '/feeder/scenarios/0: got 34.5 kV at one end and 12.47 kV at the other at /feeder/switches/1 in scenario "K closed", expected one voltage',
  ],
  [
    'phase shifts that disagree around a loop',
    { set: { ...shifted, ...scenarios({ id: 'closed', switches: { k: true } }) } },
    '/feeder/scenarios/0: got a lag of 0 × 30° where the rest of its loop makes 1 × 30° at /feeder/transformers/1 in scenario "closed", expected phase shifts that agree around the loop',
  ],
  [
    'phases that the supply lacks',
    {
      set: {
        '/feeder/nodes/6': { id: 'stub', kv: 12.47, phases: 'AB' },
        '/feeder/nodes/7': { id: 'root', kv: 12.47, phases: 'AB' },
        '/feeder/lines/4': {
          id: 'l5',
          from: 'bus',
          to: 'root',
          phases: 'AB',
          km: 1,
          z1: z(0.3, 0.4),
          z0: z(0.6, 1),
        },
        '/feeder/switches/1': { id: 'own', from: 'root', to: 'stub', closed: true },
        '/feeder/switches/2': { id: 'k', from: 'leaf', to: 'stub', closed: false },
        ...scenarios({ id: 'turned', switches: { own: false, k: true } }),
      },
    },
    '/feeder/scenarios/0: got AB at /feeder/nodes/6/phases in scenario "turned", expected phases that its supply has: A',
  ],
];

describe('Each problem of an operating case', () => {
  it.each(cases)('has its place, what is there and what was expected: %s', (_, change, expected) => {
    expect(linesOf(change)).toBe(expected);
  });

  it.each([
    ['one that changes nothing', set({ id: 'same' })],
    ['one that closes a loop of three phases', set(tie)],
    ['an island without a source', set({ id: 'gone', out: ['utility', 'genset', 'wheel'] })],
    ['a node out', set({ id: 'gone', out: ['mid'] })],
    [
      'the two ways into a lateral, one for the other',
      withSwitch({ from: 'end', to: 'leaf' }, { out: ['l4'] }),
    ],
    ['the two ways by node', withSwitch({ from: 'end', to: 'leaf' }, { out: ['pair'] })],
    [
      'unlike transformers, one for the other',
      { set: { ...shifted, ...scenarios({ id: 'turned', switches: { k: true }, out: ['main'] }) } },
    ],
    [
      'a switch called as what every object has',
      {
        set: {
          '/feeder/switches/1': { id: 'constructor', from: 'grid', to: 'end', closed: false },
          ...scenarios({ id: 'same', switches: {} }),
        },
      },
    ],
  ])('is none where it is sound: %s', (_, change) => {
    expect(linesOf(change)).toBe('');
  });
});
