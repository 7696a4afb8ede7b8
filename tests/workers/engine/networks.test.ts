import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Feeder, Impedance, Study, Transformer } from '../../../shared/schemas/study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy } from './cases.ts';

/* Small networks whose answer is plain: no resistance, E = 1, base 10 MVA, 10 kV, so Zbase 10 ohms and Ibase 577.35 A. */

const ohms = (perUnit: number): Impedance => ({ r: 0, x: perUnit * 10 });
const ibase = 10_000 / (Math.sqrt(3) * 10);
const threePhase = (...ids: string[]) => ids.map((id) => ({ id, kv: 10, phases: 'ABC' }));
const source = { id: 's', node: 'a', max: { z1: ohms(0.1), z0: ohms(0.2) } };
const line = (id: string, from: string, to: string, phases = 'ABC') => ({
  id,
  from,
  to,
  phases,
  km: 1,
  z1: ohms(0.1),
  z0: ohms(0.3),
});

function solve(feeder: Feeder, rest: Partial<Study> = {}) {
  const study = checkedStudy({
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    feeder,
    ...rest,
  });
  return runStudy(study, proFormaRuleSet);
}

describe('The zero sequence of a transformer', () => {
  const bank = (rest: Partial<Transformer>): Transformer => ({
    id: 't',
    from: 'a',
    to: 'b',
    kva: 10_000,
    connection: 'YNyn0',
    impedancePercent: 5,
    xr: 1e12,
    ...rest,
  });
  const z0At = (node: 'a' | 'b', rest: Partial<Transformer>) => {
    const z0 = solve({ nodes: threePhase('a', 'b'), sources: [source], transformers: [bank(rest)] }).nodes[
      node
    ]!.none.z0!;
    return z0 && z0.x / 10;
  };

  it.each([
    ['YNyn0', {}, 0.25],
    ['YNyn0', { neutralTo: { r: 0, x: 1 } }, 0.25 + 0.3],
    ['YNyn0', { neutralFrom: { r: 0, x: 1 }, neutralTo: { r: 0, x: 1 } }, 0.25 + 0.6],
    ['YNyn0', { zeroImpedancePercent: 4 }, 0.24],
    ['YNyn0', { neutralTo: 'ungrounded' as const }, null],
    ['Dyn1', {}, 0.05],
    ['Dyn11', { neutralTo: { r: 0, x: 1 } }, 0.35],
    ['YNd1', {}, null],
    ['Yyn0', {}, null],
    ['Yd1', {}, null],
    ['Dy1', {}, null],
    ['Dd0', {}, null],
  ])('%s with %j leaves %s beyond it', (connection, rest, expected) => {
    const z0 = z0At('b', { connection, ...rest });
    if (expected === null) expect(z0).toBeNull();
    else expect(z0).toBeCloseTo(expected, 9);
  });

  it('of YNd is a path to earth on the side of the star: 0.2 ∥ 0.05', () => {
    expect(z0At('a', { connection: 'YNd1' })).toBeCloseTo(0.04, 9);
  });

  it('counts its percentage on the rated voltage: (11/10)² of 5 %', () => {
    expect(z0At('b', { connection: 'Dyn1', ratedKvTo: 11 })).toBeCloseTo(0.0605, 9);
  });
});

describe('Faults', () => {
  it('to ground give no current where nothing is grounded, and two lines to ground is line to line', () => {
    const { a } = solve({ nodes: threePhase('a'), sources: [{ ...source, max: { z1: ohms(0.1) } }] }).nodes;
    expect(a!.none.z0).toBeNull();
    expect(a!.none.lineGround).toBe(0);
    expect(a!.none.lineLineGround).toBe(a!.none.lineLine);
    expect(a!.none.lineLineGroundEarth).toBe(0);
  });

  it('have neither impedances nor currents in a state where nothing feeds the place', () => {
    const machine = { id: 'm', node: 'a', kind: 'induction' as const, kva: 1000, xSubtransientPu: 0.2 };
    const { a } = solve({ nodes: threePhase('a'), machines: [machine] }).nodes;
    expect(a!.none).toMatchObject({
      z1: null,
      z2: null,
      z0: null,
      threePhase: 0,
      lineGround: 0,
      lineLineGround: 0,
    });
    expect(a!.before.threePhase).toBeCloseTo(ibase / 2, 6);
    expect(a!.minimum).toEqual({ threePhase: 0, lineGround: 0, lineLine: 0 });
  });

  it('are the same at two nodes that a closed switch makes one, and differ over an open one', () => {
    const feeder = (closed: boolean): Feeder => ({
      nodes: threePhase('a', 'b', 'c'),
      sources: [source],
      lines: [line('l', 'a', 'b'), line('k', 'a', 'c')],
      switches: [{ id: 'w', from: 'b', to: 'c', closed }],
    });
    const closed = solve(feeder(true)).nodes;
    expect(closed.b!.none).toEqual(closed.c!.none);
    expect(closed.b!.none.threePhase).toBeCloseTo(ibase / 0.15, 6);
    expect(solve(feeder(false)).nodes.b!.none.threePhase).toBeCloseTo(ibase / 0.2, 6);
  });

  it('take the weaker source and the fault resistance for the minimum, to ground alone', () => {
    const weak = { ...source, min: { z1: ohms(0.4), z0: ohms(0.8) } };
    const { a } = solve({ nodes: threePhase('a'), sources: [weak] }, { minimumFaultOhm: 40 }).nodes;
    expect(a!.minimum.threePhase).toBeCloseTo(ibase / 0.4, 6);
    expect(a!.minimum.lineLine).toBeCloseTo((ibase * Math.sqrt(3)) / 0.8, 6);
    expect(a!.minimum.lineGround).toBeCloseTo((ibase * 3) / Math.hypot(1.6, 12), 6);
  });

  it('of a series capacitor or star equivalent use its negative reactance', () => {
    const capacitor = { ...line('l', 'a', 'b'), z1: ohms(-0.04) };
    const { b } = solve({ nodes: threePhase('a', 'b'), sources: [source], lines: [capacitor] }).nodes;
    expect(b!.none.threePhase).toBeCloseTo(ibase / 0.06, 6);
  });

  it('warn where a capacitor cancels the source, and are still right beside it', () => {
    const capacitor = { ...line('l', 'a', 'b'), z1: ohms(-0.1) };
    const result = solve({
      nodes: threePhase('a', 'b', 'c'),
      sources: [source],
      lines: [capacitor, line('k', 'b', 'c')],
    });
    expect(result.warnings.join()).toContain('positive sequence nearly resonates');
    expect(result.nodes.a!.none.threePhase).toBeCloseTo(ibase / 0.1, 1);
    expect(result.nodes.c!.none.threePhase).toBeCloseTo(ibase / 0.1, 1);
  });

  it('without generation leave out what came with a generator', () => {
    const bank = { id: 'z', node: 'a', z0: ohms(0.2), with: 'm' };
    const machine = { id: 'm', node: 'a', kind: 'induction' as const, kva: 1000, xSubtransientPu: 0.2 };
    const { a } = solve({
      nodes: threePhase('a'),
      sources: [source],
      machines: [machine],
      groundingBanks: [bank],
    }).nodes;
    expect(a!.none.z0!.x).toBeCloseTo(2, 9);
    expect(a!.before.z0!.x).toBeCloseTo(1, 9);
  });
});

describe('A lateral', () => {
  const feeder: Feeder = {
    nodes: [...threePhase('a'), { id: 'ab', kv: 10, phases: 'AB' }, { id: 'b', kv: 10, phases: 'B' }],
    sources: [source],
    lines: [line('l', 'a', 'ab', 'AB'), line('k', 'ab', 'b', 'B')],
  };

  it('adds (Z0 + 2·Z1)/3 per segment to the loop of line to ground', () => {
    const { ab, b } = solve(feeder).nodes;
    const tap = (0.1 + 0.1 + 0.2) / 3;
    const segment = (0.3 + 0.2) / 3;
    expect(ab!.none.lineGround).toBeCloseTo(ibase / (tap + segment), 6);
    expect(b!.none.lineGround).toBeCloseTo(ibase / (tap + 2 * segment), 6);
  });

  it('adds 2·Z1 to the loop of line to line, and lacks what its phases lack', () => {
    const { ab, b } = solve(feeder).nodes;
    expect(ab!.none.lineLine).toBeCloseTo((ibase * Math.sqrt(3)) / (0.2 + 0.2), 6);
    expect(ab!.none.threePhase).toBeNull();
    expect(b!.none).toMatchObject({
      threePhase: null,
      lineLine: null,
      lineLineGround: null,
      lineLineGroundEarth: null,
    });
    expect(ab!.none).not.toHaveProperty('z1');
  });

  it.each(['AB', 'BC', 'CA'])('with an inverter on %s adds its current to line to line', (phases) => {
    const inverter = { id: 'v', node: 'end', phases, kva: 100, faultCurrentPu: 1.2 };
    const { end } = solve({
      nodes: [...threePhase('a'), { id: 'end', kv: 10, phases }],
      sources: [source],
      lines: [line('l', 'a', 'end', phases)],
      inverters: [inverter],
    }).nodes;
    expect(end!.before.lineLine! - end!.none.lineLine!).toBeCloseTo((1.2 * 100) / 10, 6);
  });

  it.each(['A', 'B', 'C'])('with an inverter on %s adds its current to line to ground', (phases) => {
    const inverter = { id: 'v', node: 'end', phases, kva: 100, faultCurrentPu: 1.2 };
    const { end } = solve({
      nodes: [...threePhase('a'), { id: 'end', kv: 10, phases }],
      sources: [source],
      lines: [line('l', 'a', 'end', phases)],
      inverters: [inverter],
    }).nodes;
    expect(end!.before.lineGround! - end!.none.lineGround!).toBeCloseTo((1.2 * 100) / (10 / Math.sqrt(3)), 6);
  });

  it('may be joined by a closed switch, and is then a lateral without length', () => {
    const { b } = solve({
      nodes: [...threePhase('a'), { id: 'b', kv: 10, phases: 'B' }],
      sources: [source],
      switches: [{ id: 'w', from: 'a', to: 'b', closed: true }],
    }).nodes;
    expect(b!.none.lineGround).toBeCloseTo((ibase * 3) / 0.4, 6);
  });

  it('has a device that carries what lies beyond it, or all the rest', () => {
    const result = solve({
      ...feeder,
      inverters: [{ id: 'v', node: 'b', phases: 'B', kva: 100, faultCurrentPu: 1.2 }],
      devices: [{ id: 'd', branch: 'l', end: 'from', kind: 'fuse', interruptingKa: 10 }],
    });
    const { before } = result.devices.d!;
    const { a } = result.nodes;
    // All but the inverter's current comes from the rest of the network; the fuse is on phases A and B alone.
    expect(before.side).toBe('rest');
    expect(before.dutyA).toBeLessThan(before.availableA);
    expect(before.availableA).toBeLessThanOrEqual(
      Math.max(a!.before.lineGround!, a!.before.lineLineGround!) + 1e-6,
    );
  });
});

describe('A long chain with a hub', () => {
  it('is solved without recursion, in minimum-degree order, as the sum of its parts', () => {
    const count = 20_000;
    const ids = Array.from({ length: count }, (_, index) => `n${index}`);
    const chain = ids.slice(1).map((id, index) => ({ ...line(`l${index}`, ids[index]!, id), km: 1 / count }));
    const spokes = ids.slice(0, 2000).map((_, index) => line(`k${index}`, 'n0', `p${index}`));
    const closing = spokes.slice(1).map((_, index) => line(`c${index}`, `p${index}`, `p${index + 1}`));
    const result = solve({
      nodes: threePhase(...ids, ...spokes.map(({ to }) => to)),
      sources: [{ ...source, node: 'n0' }],
      lines: [...chain, ...spokes, ...closing],
    });
    const last = result.nodes[ids.at(-1)!]!.none;
    expect(last.threePhase).toBeCloseTo(ibase / (0.1 + (0.1 * (count - 1)) / count), 4);
  });
});
