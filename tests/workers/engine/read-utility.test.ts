import { describe, expect, it } from 'vitest';
import type { Change } from './spoiling.ts';
import { linesOf } from './spoiling.ts';

/* What a study file says of the network beyond fault currents: each problem has its place, and one problem makes one line. */

const set = (pointer: string, value: unknown): Change => ({ set: { [pointer]: value } });
const references: [kind: string, Change, line: string][] = [
  [
    'a capacitor at no node',
    set('/feeder/capacitors/0/node', 'nowhere'),
    '/feeder/capacitors/0/node: got "nowhere", expected the id of a node of this file',
  ],
  [
    "a capacitor of the feeder at the project's node",
    set('/feeder/capacitors/0/node', 'lv'),
    '/feeder/capacitors/0/node: got "lv", expected the id of a node of the feeder',
  ],
  [
    'a capacitor with phases that its node lacks',
    set('/feeder/capacitors/0/phases', 'ABC'),
    '/feeder/capacitors/0/node: got "pair" with AB, expected a node with phases ABC',
  ],
  [
    'a capacitor that came with nothing',
    set('/feeder/capacitors/0/with', 'caps'),
    '/feeder/capacitors/0/with: got "caps", expected the id of a machine or inverter of this file',
  ],
  [
    "a project's capacitor with an id that the feeder has",
    set('/project/capacitors', [{ id: 'caps', node: 'lv', phases: 'ABC', kvar: 1 }]),
    '/project/capacitors/0/id: got "caps", expected an id of its own (/feeder/capacitors/0 has this one)',
  ],
  [
    'a substation on a line',
    set('/feeder/substations/0/transformer', 'l1'),
    '/feeder/substations/0/transformer: got "l1", expected the id of a transformer of this file',
  ],
  [
    "a substation on the project's transformer",
    set('/feeder/substations/0/transformer', 'up'),
    '/feeder/substations/0/transformer: got "up", expected the id of a transformer of the feeder',
  ],
  [
    'a service transformer at no node',
    set('/feeder/serviceTransformers/0/node', 'nowhere'),
    '/feeder/serviceTransformers/0/node: got "nowhere", expected the id of a node of this file',
  ],
  [
    'a service transformer with phases that its node lacks',
    set('/feeder/serviceTransformers/0/phases', 'B'),
    '/feeder/serviceTransformers/0/node: got "leaf" with A, expected a node with phases B',
  ],
  [
    'a service that leads nowhere',
    set('/feeder/inverters/1/service/transformer', 'main'),
    '/feeder/inverters/1/service/transformer: got "main", expected the id of a service transformer of the feeder',
  ],
  [
    "a project's service that leads nowhere",
    set('/project/inverters/0/service', { transformer: '__proto__' }),
    '/project/inverters/0/service/transformer: got "__proto__", expected the id of a service transformer of the feeder',
  ],
  [
    "a machine's service that leads nowhere",
    set('/feeder/machines/0/service', { transformer: 'none' }),
    '/feeder/machines/0/service/transformer: got "none", expected the id of a service transformer of the feeder',
  ],
  [
    'a secondary network at no node',
    set('/feeder/secondaryNetworks/0/nodes/1', 'l1'),
    '/feeder/secondaryNetworks/0/nodes/1: got "l1", expected the id of a node of this file',
  ],
  [
    'a regulator on a transformer',
    set('/feeder/regulators/0/branch', 'main'),
    '/feeder/regulators/0/branch: got "main", expected the id of a line of this file',
  ],
  [
    'a regulator with phases that its line lacks',
    set('/feeder/regulators/0/branch', 'l3'),
    '/feeder/regulators/0/branch: got "l3" with AB, expected a line with phases ABC',
  ],
  [
    'a section net of what generates nothing',
    set('/feeder/sections/0/netOf', ['solar', 'main']),
    '/feeder/sections/0/netOf/1: got "main", expected the id of a machine or inverter of this file',
  ],
  [
    'a section net of the project',
    set('/feeder/sections/0/netOf', ['plant']),
    '/feeder/sections/0/netOf/0: got "plant", expected the id of a machine or inverter of the feeder',
  ],
  ...(['substations', 'serviceTransformers', 'secondaryNetworks', 'regulators'] as const).map(
    (list): [string, Change, string] => {
      const twin = {
        substations: { id: 'yard' },
        serviceTransformers: { id: 'can', node: 'leaf', kva: 1, secondaryV: 240 },
        secondaryNetworks: { id: 'block', kind: 'area', nodes: ['end'] },
        regulators: { id: 'reg', branch: 'l1', end: 'to', phases: 'A', setVoltagePu: 1, bandwidthPu: 0.01 },
      }[list];
      return [
        `an id twice in ${list}`,
        set(`/feeder/${list}/1`, twin),
        `/feeder/${list}/1/id: got "${twin.id}", expected an id of its own (/feeder/${list}/0 has this one)`,
      ];
    },
  ),
];

describe('What a study says of the utility', () => {
  it.each(references)('is refused where it leads nowhere or to another kind: %s', (_, change, expected) => {
    expect(linesOf(change)).toBe(expected);
  });
});
