import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Line, Study } from '../../../../shared/schemas/study.ts';
import type { Flow } from '../../../../workers/engine/flow/solve-flow.ts';
import { voltageAt } from '../../../../workers/engine/flow/solve-flow.ts';
import { magnitude, scale, subtract, sum } from '../../../../workers/engine/complex.ts';
import { lineCalculator } from '../../../../workers/engine/line-impedances.ts';
import { solveDense } from './dense-flow.ts';
import { chain, flowOf, tryFlow, twoNodes } from './flows.ts';
import { randomFeeder } from './random-feeders.ts';

/** By node and phase, "n1.A". */
function voltagesOf(study: Study, flow: Flow = flowOf(study)): Map<string, number> {
  return new Map(
    study.feeder.nodes.flatMap(({ id }, node) =>
      [...'ABC'].flatMap((letter, phase) => {
        const volts = voltageAt(flow, node, phase);
        return volts === null ? [] : [[`${id}.${letter}`, volts] as const];
      }),
    ),
  );
}

function expectAlike(study: Study): void {
  const dense = solveDense(study);
  // A full solve cannot tell the voltage to earth of a place that nothing ties to earth; the sweep takes it as none.
  if (/d\d+$/.test(study.feeder.transformers![0]!.connection)) {
    const three = [...'ABC'].map((letter) => `low.${letter}`);
    const mean = scale(sum(...three.map((name) => dense.get(name)!)), 1 / 3);
    for (const name of three) dense.set(name, subtract(dense.get(name)!, mean));
  }
  const own = voltagesOf(study);
  expect(own.size).toBe(dense.size);
  for (const [name, volts] of own) {
    expect(Math.abs(volts - magnitude(dense.get(name)!)), name).toBeLessThan(1e-6);
  }
}

const anyFeeder = randomFeeder({ connections: ['YNyn0', 'Dyn1', 'YNd1', 'Dd0'], ties: 0 });
const looped = randomFeeder({ connections: ['YNyn0', 'Dyn1', 'YNd1'], ties: 3 });

describe('Load flow', () => {
  it.each(['YNyn0', 'Dyn1', 'Dyn11', 'YNd1', 'YNd11', 'Dd0'])(
    'agrees with a full nodal solve on random feeders with %s transformers',
    (connection) => {
      const feeders = randomFeeder({ connections: [connection], ties: 0 });
      fc.assert(fc.property(feeders, expectAlike), { numRuns: 25 });
    },
  );

  it('agrees with it on networks with loops', () => {
    fc.assert(fc.property(looped, expectAlike), { numRuns: 30 });
  });

  it('loses what sources give and loads do not take: R and X times the square of the current in every line', () => {
    fc.assert(
      fc.property(anyFeeder, (study) => {
        study.feeder.transformers = [];
        study.feeder.groundingBanks = [];
        const at = (element: { node: string }) => element.node !== 'low';
        study.feeder.nodes = study.feeder.nodes.filter(({ id }) => id !== 'low');
        study.feeder.loads = study.feeder.loads!.filter(at);
        study.feeder.inverters = study.feeder.inverters!.filter(at);
        const flow = flowOf(study);
        const lost = lossesInLines(study, flow);
        expect(flow.losses.kw).toBeCloseTo(lost.kw, 5);
        expect(flow.losses.kvar).toBeCloseTo(lost.kvar, 5);
      }),
      { numRuns: 25 },
    );
  });

  it('is the same whatever the order of the lists', () => {
    fc.assert(
      fc.property(looped, (study) => {
        const turned = structuredClone(study);
        const { feeder } = turned;
        feeder.nodes.reverse();
        for (const list of [feeder.lines!, feeder.loads!, feeder.inverters!, feeder.capacitors!])
          list.reverse();
        const expected = voltagesOf(study);
        for (const [name, volts] of voltagesOf(turned)) expect(volts).toBeCloseTo(expected.get(name)!, 8);
      }),
      { numRuns: 20 },
    );
  });

  it('is the same when a line is cut in two, and when another base is chosen', () => {
    fc.assert(
      fc.property(anyFeeder, (study) => {
        const other = structuredClone(study);
        const [line] = other.feeder.lines!;
        other.feeder.nodes.push({ id: 'middle', kv: 12.47, phases: 'ABC' });
        other.feeder.lines!.push({ ...line!, id: 'second', from: 'middle', km: line!.km * 0.7 });
        Object.assign(line!, { to: 'middle', km: line!.km * 0.3 });
        other.baseMva = 3.7;
        const expected = voltagesOf(study);
        const found = voltagesOf(other);
        for (const [name, volts] of expected) expect(found.get(name)).toBeCloseTo(volts, 8);
      }),
      { numRuns: 20 },
    );
  });

  it.each([
    [12.47, 1.2, 2.4, 2000, 0, 1.475],
    [12.47, 1.2, 2.4, 2000, -500, 0.707],
    [4.16, 0.3, 0.6, 500, 0, 0.845],
  ])('at %d kV behind %d + j%d ohms raises %d kW and %d kvar by %d %%', (kv, r, x, kw, kvar, percent) => {
    // Recomputed independently from the two-node equation; no printed source.
    const kva = Math.hypot(kw, kvar);
    const study = twoNodes(kv, { r, x });
    study.feeder.inverters = [
      {
        id: 'plant',
        node: 'far',
        phases: 'ABC',
        kva,
        faultCurrentPu: 1.2,
        powerFactor: ((kvar < 0 ? -1 : 1) * kw) / kva,
      },
    ];
    expect((voltageAt(flowOf(study), 1, 0)! - 1) * 100).toBeCloseTo(percent, 3);
  });

  it('falls along an untransposed line by its own matrix times the current', () => {
    const study = twoNodes(12.47, { r: 1, x: 1 });
    const conductor = { id: 'aluminium', ohmPerKm: 0.19, gmrM: 0.0074, diameterM: 0.018 };
    const place = (phase: 'A' | 'B' | 'C' | 'N', xM: number) => ({
      phase,
      xM,
      yM: 9,
      conductor: 'aluminium',
    });
    study.feeder.conductors = [conductor];
    study.feeder.constructions = [
      {
        id: 'flat',
        earthOhmM: 100,
        places: [place('A', 0), place('B', 0.8), place('C', 2.1), place('N', 1.3)],
      },
    ];
    study.feeder.lines = [{ id: 'l', from: 'near', to: 'far', phases: 'BAC', km: 4, construction: 'flat' }];
    study.feeder.loads = [{ id: 'd', node: 'far', phases: 'AC', kw: 900, kvar: 300 }];
    const flow = flowOf(study);
    const { zPerKm } = lineCalculator(study)(study.feeder.lines[0] as Line & { construction: string });
    const ohms = 12.47 ** 2 / study.baseMva / 4;
    const order = [1, 0, 2];
    for (let p = 0; p < 3; p++) {
      const fall = [0, 0];
      order.forEach((row, i) => {
        if (row !== p) return;
        order.forEach((column, k) => {
          const { r, x } = zPerKm[i]![k]!;
          const [re, im] = [0, 1].map((part) => flow.currents.far[6 + 2 * column + part]!) as [
            number,
            number,
          ];
          fall[0]! += (r * re - x * im) / ohms;
          fall[1]! += (r * im + x * re) / ohms;
        });
      });
      for (let part = 0; part < 2; part++)
        expect(flow.v[2 * p + part]! - flow.v[6 + 2 * p + part]!).toBeCloseTo(fall[part]!, 9);
    }
    // The load is on the first and the last phase, so the voltage of the middle one moves by coupling alone.
    expect(voltageAt(flow, 1, 1)).not.toBeCloseTo(1, 4);
  });

  it('holds two sources that a line joins, each at its own voltage, and gives the difference between them', () => {
    const study = twoNodes(12.47, { r: 0, x: 2 });
    study.feeder.sources!.push({
      ...study.feeder.sources![0]!,
      id: 'second',
      node: 'far',
      peakVoltagePu: 0.98,
    });
    const flow = flowOf(study);
    expect([0, 1].map((node) => voltageAt(flow, node, 0))).toEqual([1, 0.98]);
    expect(flow.losses.kvar).toBeCloseTo((12.47 ** 2 / 2) * 0.02 ** 2 * 1000, 5);
    expect(flow.loads).toEqual({ kw: 0, kvar: 0 });
  });

  it('takes the minimum load with vars in proportion, and none without it', () => {
    const study = twoNodes(12.47, { r: 1.2, x: 2.4 });
    study.feeder.loads = [{ id: 'd', node: 'far', phases: 'ABC', kw: 2000, kvar: 800, minimumKw: 500 }];
    study.feeder.sources![0]!.minimumVoltagePu = 1.02;
    const flow = flowOf(study, { load: 'minimum' });
    expect(flow.loads.kw).toBeCloseTo(500, 6);
    expect(flow.loads.kvar).toBeCloseTo(200, 6);
    expect(voltageAt(flow, 0, 0)).toBe(1.02);
    delete study.feeder.loads[0]!.minimumKw;
    expect(tryFlow(study, { load: 'minimum' })).toEqual({
      failure: expect.stringContaining('of d for one') as string,
    });
  });

  it('gives a reason and no number where the network cannot carry the load', () => {
    const study = twoNodes(12.47, { r: 1.2, x: 2.4 });
    study.feeder.loads = [{ id: 'd', node: 'far', phases: 'ABC', kw: 40_000, kvar: 0 }];
    expect(tryFlow(study)).toEqual({ failure: expect.stringContaining('does not converge') as string });
  });

  it('refuses one phase of load to a neutral that its place does not have, and names it', () => {
    const study = twoNodes(12.47, { r: 1.2, x: 2.4 });
    study.feeder.nodes.push({ id: 'low', kv: 0.48, phases: 'ABC' });
    study.feeder.transformers = [
      { id: 't', from: 'far', to: 'low', kva: 500, connection: 'Dd0', impedancePercent: 5, xr: 4 },
    ];
    study.feeder.loads = [{ id: 'lamp', node: 'low', phases: 'A', kw: 1, kvar: 0 }];
    expect(tryFlow(study)).toEqual({ failure: expect.stringContaining('lamp') as string });
  });

  it('leaves what no source feeds without a voltage', () => {
    const study = twoNodes(12.47, { r: 1, x: 1 });
    study.feeder.lines = [];
    expect(voltageAt(flowOf(study), 1, 0)).toBeNull();
  });

  it('keeps a machine at its power and lets it draw what unbalance there is', () => {
    const study = twoNodes(12.47, { r: 1.2, x: 2.4 });
    study.feeder.loads = [{ id: 'd', node: 'far', phases: 'A', kw: 600, kvar: 0 }];
    const unbalance = (with_: Study) => {
      const flow = flowOf(with_);
      return voltageAt(flow, 1, 1)! - voltageAt(flow, 1, 0)!;
    };
    const alone = unbalance(study);
    study.feeder.machines = [
      {
        id: 'm',
        node: 'far',
        kind: 'synchronous',
        kva: 3000,
        powerFactor: 0,
        exportKw: 0,
        xSubtransientPu: 0.2,
        neutral: 'ungrounded',
      },
    ];
    expect(unbalance(study)).toBeLessThan(alone);
  });

  it('takes a number of iterations that does not grow with the feeder', () => {
    const iterations = [100, 20_000].map((count) => flowOf(chain(count)).iterations);
    expect(iterations[1]).toBeLessThanOrEqual(iterations[0]! + 1);
  });
});

/** Of the self and mutual impedances of each line and the currents that its far end takes. */
function lossesInLines(
  { feeder, baseMva }: Study,
  { network, currents }: Flow,
): { kw: number; kvar: number } {
  const lost = { kw: 0, kvar: 0 };
  feeder.nodes.forEach((_, node) => {
    const place = network.placeOf[node]!;
    const line = feeder.lines![network.branch[place]!];
    if (!line) return;
    const ohms = 12.47 ** 2 / baseMva;
    const per = (part: 'r' | 'x', self: boolean) =>
      ((self ? line.z0![part] + 2 * line.z1![part] : line.z0![part] - line.z1![part]) / 3) * (line.km / ohms);
    const at = (phase: number, part: number) => currents.far[6 * place + 2 * phase + part]!;
    for (let p = 0; p < 3; p++) {
      for (let q = 0; q < 3; q++) {
        // conj(I_p)·z·I_q, of which the imaginary parts of the products cancel between p and q.
        const product = at(p, 0) * at(q, 0) + at(p, 1) * at(q, 1);
        lost.kw += (product * per('r', p === q) * baseMva * 1000) / 3;
        lost.kvar += (product * per('x', p === q) * baseMva * 1000) / 3;
      }
    }
  });
  return lost;
}
