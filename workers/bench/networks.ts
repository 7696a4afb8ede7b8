import type { Device, Line, Machine, Node, Study } from '../../shared/schemas/study.ts';
import { studyFormat } from '../../shared/schemas/study.ts';

/* Networks to measure with: always the same for the same kind and size. */

export const networkKinds = ['radial', 'ties', 'chain'] as const;
export type NetworkKind = (typeof networkKinds)[number];

/** Pseudo-random numbers from 0 to 1 (a linear congruential generator, modulus 2³²). */
function makeRandom(): () => number {
  let state = 12345;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 4294967296;
  };
}

/**
 * Makes a feeder: "radial" runs on from the last node seven times in ten and branches off within the last fifty otherwise;
 * "ties" adds lines between nodes at most twenty apart, one for a hundred nodes; "chain" is one line after the other.
 * One node in twenty has a machine, one line in a hundred a device; a project with one machine joins at the last node.
 */
export function makeNetwork(kind: NetworkKind, count: number): Study {
  const random = makeRandom();
  const name = (index: number) => `n${index}`;
  const nodes: Node[] = Array.from({ length: count }, (_, index) => ({
    id: name(index),
    kv: 12.47,
    phases: 'ABC',
  }));
  const makeLine = (id: string, from: number, to: number): Line => {
    const km = 0.02 + 0.1 * random();
    const z1 = { r: 0.1 + 0.3 * random(), x: 0.35 + 0.1 * random() };
    return {
      id,
      from: name(from),
      to: name(to),
      phases: 'ABC',
      km,
      z1,
      z0: { r: z1.r + 0.2, x: 3 * z1.x },
    };
  };
  const nearer = (index: number) => {
    if (kind === 'chain' || random() < 0.7) return index - 1;
    return Math.max(0, index - 1 - Math.floor(random() * 50));
  };
  const lines: Line[] = [];
  for (let index = 1; index < count; index++) lines.push(makeLine(`l${index}`, nearer(index), index));
  for (let tie = 0; kind === 'ties' && tie < count / 100; tie++) {
    const from = Math.floor(random() * (count - 21));
    lines.push(makeLine(`t${tie}`, from, from + 2 + Math.floor(random() * 18)));
  }
  const machines: Machine[] = [];
  for (let index = 20; index < count; index += 20)
    machines.push(makeMachine(`m${index}`, name(index), random()));
  const devices: Device[] = [];
  for (let index = 1; index < count; index += 100) {
    devices.push({
      id: `d${index}`,
      branch: `l${index}`,
      end: 'from',
      kind: 'recloser',
      interruptingKa: 12.5,
    });
  }
  return {
    format: studyFormat,
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1.05, min: 0.95 },
    feeder: {
      nodes,
      lines,
      machines,
      devices,
      sources: [{ id: 's', node: name(0), max: { z1: { r: 0.05, x: 0.6 }, z0: { r: 0.1, x: 0.9 } } }],
    },
    project: { id: 'p', node: name(count - 1), machines: [makeMachine('p', name(count - 1), 0.5)] },
  };
}

function makeMachine(id: string, node: string, size: number): Machine {
  return {
    id,
    node,
    kind: 'synchronous',
    kva: 50 + 200 * size,
    rPu: 0.01,
    xSubtransientPu: 0.18,
    x2Pu: 0.2,
    x0Pu: 0.08,
    neutral: size < 0.5 ? 'solid' : 'ungrounded',
  };
}
