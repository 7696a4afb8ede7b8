import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../../shared/schemas/study-result.ts';
import type { Line, Machine, Study, Transformer } from '../../../shared/schemas/study.ts';
import { kappa } from '../../../workers/engine/asymmetry.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { add, divide, multiply } from '../../../workers/engine/complex.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy } from './cases.ts';

const run = (study: Study): StudyResult => runStudy(checkedStudy(study), proFormaRuleSet);

const base = {
  format: 'feederwright.study/1',
  frequencyHz: 50,
  baseMva: 1,
  // Not used by the method, and so set to what would show.
  prefaultFactor: { max: 2, min: 2 },
} as const;

/*
 * IEC TR 60909-4:2000, clause 3: a 400 V network. Data and results from memory, results reproduced by calculation to
 * 0.2 %; the book rounds KT, so the tolerance is 0.3 %. The transformers are 20/0.41 kV: the engine's ratio is that of
 * nominal voltages, so the high side stands at 20·0.40/0.41 kV.
 */
describe('The 400 V network of IEC TR 60909-4, clause 3', () => {
  const z = (1.1 * 20) / (Math.sqrt(3) * 10);
  const x = 0.995 * z;
  const transformer = (id: string, kva: number, lossKw: number, to: string): Transformer => {
    const resistancePercent = (lossKw / kva) * 100;
    const xr = Math.sqrt(4 ** 2 - resistancePercent ** 2) / resistancePercent;
    // X0/X1 = 0.95 and R0/R1 = 1; the engine has one ratio for both.
    const ratio = Math.hypot(1, 0.95 * xr) / Math.hypot(1, xr);
    return {
      id,
      from: 'Q',
      to,
      kva,
      connection: 'Dyn11',
      impedancePercent: 4,
      xr,
      zeroImpedancePercent: 4 * ratio,
      ratedKvTo: 0.41,
    };
  };
  const cable = (
    id: string,
    ends: [from: string, to: string],
    metres: number,
    [r, reactance]: [number, number],
    [r0, x0]: [number, number],
  ): Line => ({
    id,
    from: ends[0],
    to: ends[1],
    phases: 'ABC',
    km: metres / 1000,
    z1: { r, x: reactance },
    z0: { r: r * r0, x: reactance * x0 },
  });
  const low = (id: string) => ({ id, kv: 0.4, phases: 'ABC' });
  const result = run({
    ...base,
    options: { method: 'iec60909', lowVoltageTolerancePercent: 6 },
    feeder: {
      nodes: [{ id: 'Q', kv: (20 * 0.4) / 0.41, phases: 'ABC' }, ...['F1', 'T2', 'F2', 'L3', 'F3'].map(low)],
      sources: [{ id: 'network', node: 'Q', max: { z1: { r: 0.1 * x, x } } }],
      transformers: [transformer('T1', 630, 6.5, 'F1'), transformer('T2', 400, 4.6, 'T2')],
      lines: [
        cable('L1', ['F1', 'F2'], 10, [0.077 / 2, 0.079 / 2], [3.7, 1.81]),
        cable('L2', ['T2', 'F2'], 4, [0.208 / 2, 0.068 / 2], [4.23, 1.21]),
        cable('L3', ['F2', 'L3'], 20, [0.271, 0.087], [3, 4.46]),
        cable('L4', ['L3', 'F3'], 50, [0.3704, 0.297], [2, 3]),
      ],
    },
  });

  it.each([
    ['F1', 1.881, 6.746, 34_620, 35_640],
    ['F2', 1.977, 6.827, 34_120, 34_980],
    ['F3', 25.917, 23.417, 6950, 4830],
  ])('has at %s the impedance and the currents that the report prints', (node, r, reactance, ik, ik1) => {
    const { z1, threePhase, lineGround } = result.nodes[node]!.before;
    const size = Math.hypot(r, reactance);
    expect(Math.hypot(z1!.r * 1000 - r, z1!.x * 1000 - reactance) / size).toBeLessThan(0.003);
    expect(Math.abs(threePhase! / ik - 1)).toBeLessThan(0.003);
    expect(Math.abs(lineGround! / ik1 - 1)).toBeLessThan(0.003);
  });
});

/* Formulas of IEC 60909-0:2016 from memory; the numbers follow from them by hand. */
describe('Method IEC 60909-0', () => {
  const node = (id: string, kv: number) => ({ id, kv, phases: 'ABC' });
  const machine = (changes: Partial<Machine> = {}): Machine => ({
    id: 'G',
    node: 'terminal',
    kind: 'synchronous',
    kva: 1000,
    rPu: 0,
    xSubtransientPu: 0.2,
    neutral: 'ungrounded',
    ratedPowerFactor: 0.8,
    ...changes,
  });
  const study = (feeder: Study['feeder'], options: Study['options'] = {}): Study => ({
    ...base,
    options: { method: 'iec60909', ...options },
    feeder,
  });
  const perUnit = (amperes: number | null, kv: number) => (amperes! * Math.sqrt(3) * kv) / 1000;

  it('puts c of the faulted voltage in place of the prefault factor', () => {
    const at = (kv: number, options: Study['options']) => {
      const source = { id: 's', node: 'n', max: { z1: { r: 0, x: kv * kv } } };
      const { before, minimum } = run(study({ nodes: [node('n', kv)], sources: [source] }, options)).nodes.n!;
      return [perUnit(before.threePhase, kv), perUnit(minimum.threePhase, kv)];
    };
    const expectPair = ([max, min]: number[], expected: [number, number]) => {
      expect(max).toBeCloseTo(expected[0], 9);
      expect(min).toBeCloseTo(expected[1], 9);
    };
    expectPair(at(20, {}), [1.1, 1]);
    expectPair(at(1.001, {}), [1.1, 1]);
    expectPair(at(1, {}), [1.1, 0.9]);
    expectPair(at(0.4, { lowVoltageTolerancePercent: 6 }), [1.05, 0.95]);
  });

  it('corrects a network transformer by KT for the largest currents only', () => {
    const { nodes } = run(
      study({
        nodes: [node('grid', 20), node('low', 10)],
        sources: [{ id: 's', node: 'grid', max: { z1: { r: 0, x: 400 * 0.01 } } }],
        transformers: [
          { id: 'T', from: 'grid', to: 'low', kva: 1000, connection: 'Dyn1', impedancePercent: 6, xr: 1e9 },
        ],
      }),
    );
    const kt = (0.95 * 1.1) / (1 + 0.6 * 0.06);
    expect(perUnit(nodes.low!.before.threePhase, 10)).toBeCloseTo(1.1 / (0.01 + 0.06 * kt), 6);
    expect(nodes.low!.before.z0!.x).toBeCloseTo(100 * 0.06 * kt, 6);
    expect(perUnit(nodes.low!.minimum.threePhase, 10)).toBeCloseTo(1 / 0.07, 6);
  });

  it('corrects a generator by KG, and warns where its power factor is not given', () => {
    const kg = 1.1 / (1 + 0.2 * 0.6);
    const of = (changes: Partial<Machine>) =>
      run(study({ nodes: [node('terminal', 10)], machines: [machine(changes)] }));
    const given = of({});
    expect(perUnit(given.nodes.terminal!.before.threePhase, 10)).toBeCloseTo(1.1 / (0.2 * kg), 6);
    expect(given.warnings.join()).not.toContain('ratedPowerFactor');
    const { ratedPowerFactor: _, ...unknown } = machine();
    const assumed = run(study({ nodes: [node('terminal', 10)], machines: [unknown] }));
    expect(assumed.nodes).toEqual(given.nodes);
    expect(assumed.warnings.join()).toContain('Machine G gives no ratedPowerFactor');
    // 10.5 kV rated: the ohms grow by 1.05², KG falls by 1/1.05.
    const higher = of({ ratedKv: 10.5 });
    expect(perUnit(higher.nodes.terminal!.before.threePhase, 10)).toBeCloseTo(1.1 / (0.2 * kg * 1.05), 6);
  });

  it('leaves an induction machine as it is', () => {
    const { neutral: _, ...rest } = machine({ kind: 'induction' });
    const { nodes } = run(study({ nodes: [node('terminal', 10)], machines: [rest] }));
    expect(perUnit(nodes.terminal!.before.threePhase, 10)).toBeCloseTo(1.1 / 0.2, 6);
  });

  const unit = (onLoadTapChanger: boolean, ratedKvTo = 100) =>
    study({
      nodes: [node('terminal', 10), node('grid', 110)],
      machines: [machine()],
      transformers: [
        {
          id: 'T',
          from: 'terminal',
          to: 'grid',
          kva: 1000,
          connection: 'YNd1',
          impedancePercent: 12,
          xr: 1e9,
          ratedKvTo,
          unitMachine: 'G',
          onLoadTapChanger,
        },
      ],
    });

  // UnQ 110, UrG 10, UrTLV 10, UrTHV 100: UnQ/UrG·UrTLV/UrTHV = 1.1. In per unit of 110 kV the transformer has
  // 0.12·(100/110)², and the generator, over nominal voltages, 0.2.
  it.each([
    [true, (1.1 ** 2 * 1.1) / (1 + 0.08 * 0.6)],
    [false, (1.1 * 1.1) / (1 + 0.2 * 0.6)],
  ])('corrects a power station unit, tap changer on load %s, as a whole', (onLoad, factor) => {
    const { nodes, warnings } = run(unit(onLoad));
    const z = 0.2 + 0.12 * (100 / 110) ** 2;
    expect(perUnit(nodes.grid!.before.threePhase, 110)).toBeCloseTo(1.1 / (z * factor), 6);
    expect(warnings.join()).toContain('between the two');
  });

  it('warns of a unit transformer that does not stand at its machine', () => {
    const wrong = unit(true);
    wrong.feeder.nodes.push(node('elsewhere', 10));
    wrong.feeder.lines = [
      {
        id: 'l',
        from: 'terminal',
        to: 'elsewhere',
        phases: 'ABC',
        km: 1,
        z1: { r: 0, x: 1 },
        z0: { r: 0, x: 1 },
      },
    ];
    wrong.feeder.machines![0]!.node = 'elsewhere';
    expect(run(wrong).warnings.join()).toContain('no synchronous machine at one of its ends');
  });

  it('refuses a unit machine that does not exist, by place', () => {
    const wrong = unit(true);
    wrong.feeder.transformers![0]!.unitMachine = 'nobody';
    expect(() => run(wrong)).toThrow('/feeder/transformers/0/unitMachine');
  });

  it('refuses a tolerance that table 1 does not have, by place', () => {
    const odd = study(
      { nodes: [node('terminal', 10)], machines: [machine()] },
      { lowVoltageTolerancePercent: 7 as 6 },
    );
    expect(() => run(odd)).toThrow('/options/lowVoltageTolerancePercent');
  });

  it('says that inverter currents are phasors', () => {
    const inverter = { id: 'i', node: 'terminal', phases: 'ABC', kva: 10, faultCurrentPu: 1 };
    const feeder = { nodes: [node('terminal', 10)], machines: [machine()] };
    expect(run(study(feeder)).warnings.join()).not.toContain('inverter');
    expect(run(study({ ...feeder, inverters: [inverter] })).warnings.join()).toContain('inverter currents');
  });

  it('has peaks by κ at the equivalent frequency of 20 Hz in 50', () => {
    const sources = [
      { r: 0.1, x: 1 },
      { r: 1, x: 1 },
    ].map((z1, index) => ({ id: `s${index}`, node: 'n', max: { z1 } }));
    const line = { z1: { r: 0.2, x: 0.3 }, z0: { r: 0.2, x: 0.3 } };
    const { devices } = run(
      study({
        nodes: [node('n', 20), node('m', 20)],
        sources,
        lines: [{ id: 'l', from: 'n', to: 'm', phases: 'ABC', km: 1, ...line }],
        devices: [{ id: 'd', branch: 'l', end: 'from', kind: 'breaker', interruptingKa: 20 }],
      }),
    );
    const slow = (r: number, x: number): Complex => ({ re: r, im: 0.4 * x });
    const [p, q] = [slow(0.1, 1), slow(1, 1)];
    const parallel = divide(multiply(p, q), add(p, q));
    const rx = (parallel.re / parallel.im) * 0.4;
    const { availableA, peakA } = devices.d!.before;
    expect(peakA! / (Math.SQRT2 * availableA)).toBeCloseTo(kappa(1 / rx), 9);
  });
});
