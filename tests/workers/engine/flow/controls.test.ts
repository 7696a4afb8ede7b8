import { describe, expect, it } from 'vitest';
import type { Regulator } from '../../../../shared/schemas/study-utility.ts';
import type { Study } from '../../../../shared/schemas/study.ts';
import { voltageAt } from '../../../../workers/engine/flow/solve-flow.ts';
import { readCurve } from '../../../../workers/engine/flow/volt-var.ts';
import { flowOf } from './flows.ts';

/* bus — l1 — head — l2 — far, a regulator at the start of l2, 3 MW at the far end. */
function feeder(regulator: Partial<Regulator> = {}): Study {
  const line = { phases: 'ABC', km: 4, z1: { r: 0.3, x: 0.6 }, z0: { r: 0.6, x: 1.8 } };
  return {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    feeder: {
      nodes: ['bus', 'head', 'far'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
      lines: [
        { ...line, id: 'l1', from: 'bus', to: 'head' },
        { ...line, id: 'l2', from: 'head', to: 'far' },
      ],
      sources: [{ id: 's', node: 'bus', max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 1 } } }],
      loads: [{ id: 'd', node: 'far', phases: 'ABC', kw: 3000, kvar: 900 }],
      regulators: [
        {
          id: 'VR',
          branch: 'l2',
          end: 'from',
          phases: 'ABC',
          setVoltagePu: 1.02,
          bandwidthPu: 0.0125,
          reverse: 'locked',
          ...regulator,
        },
      ],
    },
  };
}

/** Sends so many kW out at the far end, where nothing else is drawn. */
function feedBack(study: Study, kw: number): Study {
  study.feeder.loads = [];
  study.feeder.inverters = [{ id: 'v', node: 'far', phases: 'ABC', kva: kw, faultCurrentPu: 1.2 }];
  return study;
}

const taps = (study: Study) => [...flowOf(study).state.taps.get('VR')!];

describe('Regulators', () => {
  it('stop at the first tap that is inside the band', () => {
    const study = feeder();
    const flow = flowOf(study);
    const [tap] = flow.state.taps.get('VR')!;
    const held = voltageAt(flow, 1, 0)! * (1 + 0.00625 * tap!);
    expect(held).toBeGreaterThan(1.02 - 0.00625);
    // One tap less would be under the band.
    expect(held - 0.00625).toBeLessThan(1.02 - 0.00625);
    expect(held).toBeCloseTo(1.0168, 2);
  });

  it('regulate each phase by itself', () => {
    const study = feeder();
    study.feeder.loads!.push({ id: 'one', node: 'far', phases: 'B', kw: 900, kvar: 200 });
    const [a, b, c] = taps(study);
    expect(b).toBeGreaterThan(a!);
    expect(c).toBeLessThanOrEqual(b!);
  });

  it('at the far end of a line hold the voltage there', () => {
    const flow = flowOf(feeder({ end: 'to', bandwidthPu: 0.02, rangePu: 0.3, steps: 48 }));
    expect(Math.abs(voltageAt(flow, 2, 0)! - 1.02)).toBeLessThanOrEqual(0.01 + 1e-9);
  });

  it('make up for the drop of the line with compensation', () => {
    // Ohms of all of l2: what is held is the voltage at its far end.
    const flow = flowOf(
      feeder({ compensation: { r: 1.2, x: 2.4 }, rangePu: 0.2, steps: 32, bandwidthPu: 0.0126 }),
    );
    expect(Math.abs(voltageAt(flow, 2, 0)! - 1.02)).toBeLessThanOrEqual(0.0063 + 1e-6);
  });

  it('go no further than their range', () => {
    expect(taps(feeder({ setVoltagePu: 1.2 }))).toEqual([16, 16, 16]);
  });

  it('move, the one nearest the source first, so that the next does not overshoot', () => {
    const study = feeder({ bandwidthPu: 0.0167 });
    study.feeder.regulators!.push({
      ...study.feeder.regulators![0]!,
      id: 'first',
      branch: 'l1',
      setVoltagePu: 1.02,
    });
    const { state } = flowOf(study);
    expect(state.taps.get('first')![0]).toBeGreaterThan(0);
    expect(state.taps.get('VR')![0]).toBeLessThan(taps(feeder({ bandwidthPu: 0.0167 }))[0]!);
  });

  it('stay where they are when power flows back and they are locked', () => {
    expect(taps(feedBack(feeder(), 3000))).toEqual([0, 0, 0]);
    const start = { taps: new Map([['VR', [3, 3, 3]]]), capacitorsOn: new Set<string>() };
    expect(flowOf(feedBack(feeder(), 3000), { start }).state.taps.get('VR')).toEqual([3, 3, 3]);
  });

  it('go on as before where they are set for generation beyond', () => {
    const flow = flowOf(feedBack(feeder({ reverse: 'cogeneration', setVoltagePu: 0.98 }), 3000));
    const [tap] = flow.state.taps.get('VR')!;
    expect(tap).toBeLessThan(0);
    expect(Math.abs(voltageAt(flow, 1, 0)! * (1 + 0.00625 * tap!) - 0.98)).toBeLessThanOrEqual(
      0.00625 + 1e-9,
    );
  });

  it('run to their end where they try to hold the side of a source that is still there', () => {
    // 1.05 cannot be had on that side: each step down is meant to raise it, and lowers the far side instead.
    expect(taps(feedBack(feeder({ reverse: 'bidirectional', setVoltagePu: 1.05 }), 3000))).toEqual([
      -16, -16, -16,
    ]);
  });

  it('are held where a start puts them, when controls are held', () => {
    const start = { taps: new Map([['VR', [5, 4, 3]]]), capacitorsOn: new Set<string>() };
    const flow = flowOf(feeder(), { controls: 'held', start });
    expect(flow.state.taps.get('VR')).toEqual([5, 4, 3]);
  });

  /* A regulator at an end of a branch is one in a line next to that end that is hardly there. */
  it.each([
    ['line', 'from'],
    ['line', 'to'],
    ['YNyn0', 'from'],
    ['YNyn0', 'to'],
    ['Dyn1', 'to'],
    ['YNd1', 'from'],
  ] as const)('in a %s at its %s end are as good as next to it', (kind, end) => {
    const start = { taps: new Map([['VR', [5, -4, 9]]]), capacitorsOn: new Set<string>() };
    const study = feeder({ branch: 'between', end });
    const { feeder: plain } = study;
    plain.nodes.push({ id: 'beyond', kv: 12.47, phases: 'ABC' });
    const [line] = plain.lines!;
    if (kind === 'line') plain.lines!.push({ ...line!, id: 'between', from: 'far', to: 'beyond' });
    else {
      const rating = { kva: 5000, connection: kind, impedancePercent: 6, xr: 8 };
      plain.transformers = [{ id: 'between', from: 'far', to: 'beyond', ...rating }];
    }
    plain.loads = [
      { id: 'd', node: 'beyond', phases: 'ABC', kw: 1500, kvar: 500, connection: 'delta' },
      { id: 'e', node: 'beyond', phases: 'AB', kw: 400, kvar: 100, connection: 'delta' },
    ];
    const beside = structuredClone(study);
    const { feeder: changed } = beside;
    changed.nodes.push({ id: 'gap', kv: 12.47, phases: 'ABC' });
    const between = [...(changed.transformers ?? []), ...changed.lines!].find(({ id }) => id === 'between')!;
    const [from, to] = end === 'from' ? ['far', 'gap'] : ['gap', 'beyond'];
    changed.lines!.push({ ...line!, id: 'short', km: 1e-9, from, to });
    if (end === 'from') between.from = 'gap';
    else between.to = 'gap';
    Object.assign(changed.regulators![0]!, { branch: 'short', end: 'from' });
    const [expected, own] = [beside, study].map((each) => flowOf(each, { controls: 'held', start }));
    for (const phase of [0, 1, 2])
      for (const node of [1, 2, 3])
        expect(voltageAt(own!, node, phase)).toBeCloseTo(voltageAt(expected!, node, phase)!, 7);
    expect(own!.sources.kw).toBeCloseTo(expected!.sources.kw, 3);
  });

  it('give no number where they move back and forth for ever', () => {
    // The band is narrower than a tap: no tap is inside it.
    expect(() => flowOf(feeder({ bandwidthPu: 0.0001 }))).toThrow('VR moves back and forth');
  });
});

describe('Capacitors', () => {
  const withBank = (switchedByVoltage?: [number, number]) => {
    const study = feeder();
    study.feeder.regulators = [];
    study.feeder.capacitors = [
      { id: 'C', node: 'far', phases: 'ABC', kvar: 900, ...(switchedByVoltage && { switchedByVoltage }) },
    ];
    return study;
  };

  it('raise the voltage with the square of it', () => {
    const flow = flowOf(withBank());
    const volts = voltageAt(flow, 2, 0)!;
    expect(flow.loads.kvar).toBeCloseTo(900 - 900 * volts ** 2, 6);
  });

  it('switch on when the voltage falls below the one limit, and off above the other', () => {
    const on = flowOf(withBank([0.97, 1.03]));
    expect([...on.state.capacitorsOn]).toEqual(['C']);
    expect(voltageAt(on, 2, 0)).toBeCloseTo(voltageAt(flowOf(withBank()), 2, 0)!, 9);
    const start = { taps: new Map(), capacitorsOn: new Set(['C']) };
    expect(flowOf(withBank([0.5, 0.6]), { start }).state.capacitorsOn.size).toBe(0);
    // Between the two it stays as it was.
    expect(flowOf(withBank([0.5, 1.03]), { start }).state.capacitorsOn.size).toBe(1);
    expect(flowOf(withBank([0.5, 1.03])).state.capacitorsOn.size).toBe(0);
  });
});

describe('Vars that follow the voltage', () => {
  const curve: [number, number][] = [
    [0.92, 0.44],
    [0.98, 0],
    [1.02, 0],
    [1.08, -0.44],
  ];

  it('are read from straight lines between the points, and level outside', () => {
    expect([0.9, 0.95, 1, 1.05, 1.2].map((volts) => readCurve(curve, volts))).toEqual([
      0.44,
      expect.closeTo(0.22, 12),
      0,
      expect.closeTo(-0.22, 12),
      -0.44,
    ]);
  });

  it.each(['ABC', 'AB', 'A'])('settle on the curve on phases %s', (phases) => {
    const study = feeder();
    study.feeder.regulators = [];
    study.feeder.loads = [];
    study.feeder.sources![0]!.peakVoltagePu = 1.03;
    const [kva, exportKw] = phases === 'ABC' ? [3000, 2000] : [900, 600];
    study.feeder.inverters = [
      { id: 'v', node: 'far', phases, kva, exportKw, faultCurrentPu: 1.2, voltVar: curve },
    ];
    const flow = flowOf(study);
    const [a, b] = [0, 1].map((phase) => [flow.v[12 + 2 * phase]!, flow.v[13 + 2 * phase]!] as const);
    const volts =
      phases === 'AB' ? Math.hypot(a![0] - b![0], a![1] - b![1]) / Math.sqrt(3) : voltageAt(flow, 2, 0)!;
    expect(-flow.loads.kvar).toBeCloseTo(readCurve(curve, volts) * kva, 4);
    expect(-flow.loads.kvar).toBeLessThan(-10);
  });

  it('are no more than what the power leaves of the rating', () => {
    const study = feeder();
    study.feeder.loads = [];
    study.feeder.sources![0]!.peakVoltagePu = 1.1;
    study.feeder.inverters = [
      { id: 'v', node: 'far', phases: 'ABC', kva: 1000, exportKw: 990, faultCurrentPu: 1.2, voltVar: curve },
    ];
    expect(-flowOf(study).loads.kvar).toBeCloseTo(-Math.sqrt(1000 ** 2 - 990 ** 2), 4);
  });
});
