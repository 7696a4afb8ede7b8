import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { reportPreApplication } from '../../../workers/engine/pre-application.ts';
import { checkedStudy } from './cases.ts';

const z1 = { r: 0.2, x: 0.4 };
const z0 = { r: 0.5, x: 1.2 };
const line = { phases: 'ABC', km: 2, z1, z0, circuit: 'K1' };

/** A bank, a feeder of two spans, a fuse on the second; one roof in service, one machine in the queue. */
function makeStudy(change: (study: Study) => void = () => undefined): Study {
  const study: Study = {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1.05, min: 0.95 },
    feeder: {
      nodes: [
        { id: 'high', kv: 69, phases: 'ABC' },
        { id: 'bus', kv: 12.47, phases: 'ABC' },
        { id: 'a', kv: 12.47, phases: 'ABC' },
        { id: 'b', kv: 12.47, phases: 'ABC' },
        { id: 'q-7/lv', kv: 0.48, phases: 'ABC' },
      ],
      sources: [{ id: 's', node: 'high', max: { z1: { r: 1, x: 8 }, z0: { r: 2, x: 10 } } }],
      transformers: [
        {
          ...{ id: 't1', from: 'high', to: 'bus', kva: 10_000 },
          connection: 'Dyn1',
          impedancePercent: 8,
          xr: 15,
        },
        {
          ...{ id: 'q-7/t', from: 'b', to: 'q-7/lv', kva: 600 },
          connection: 'YNd1',
          impedancePercent: 5,
          xr: 6,
        },
      ],
      lines: [
        { id: 'l1', from: 'bus', to: 'a', ...line, ampacityA: 500, mainline: true },
        // Drawn the other way round: the way is found all the same.
        { id: 'l2', from: 'b', to: 'a', ...line, ampacityA: 200, mainline: false },
      ],
      machines: [
        {
          ...{ id: 'q-7/g', node: 'q-7/lv', kind: 'synchronous', kva: 500, xSubtransientPu: 0.2 },
          neutral: 'ungrounded',
        },
      ],
      inverters: [{ id: 'roof', node: 'a', phases: 'ABC', kva: 100, faultCurrentPu: 1.1 }],
      devices: [
        { id: 'cb', branch: 'l1', end: 'from', kind: 'breaker', interruptingKa: 12.5 },
        { id: 'f', branch: 'l2', end: 'to', kind: 'fuse', interruptingKa: 1 },
      ],
      sections: [
        { id: 'all', device: 'cb', peakKw: 4000, minimumKw: 1100 },
        { id: 'far', device: 'f', peakKw: 900 },
      ],
      circuits: [{ id: 'K1', lineType: 'four-wire' }],
      substations: [{ id: 'sub', transformer: 't1', kva: 10_000, highSideKv: 69, stabilityLimited: false }],
      regulators: [
        { id: 'r', branch: 'l1', end: 'from', phases: 'ABC', setVoltagePu: 1.02, bandwidthPu: 0.0167 },
      ],
      capacitors: [{ id: 'c', node: 'b', phases: 'ABC', kvar: 300 }],
    },
  };
  change(study);
  return checkedStudy(study);
}

const report = (study: Study, node = 'b') => reportPreApplication(study, node, proFormaRuleSet, 0.875);

describe('A pre-application report', () => {
  it('tells of the way to the substation and of what is on it, the nearest first', () => {
    expect(report(makeStudy())).toMatchObject({
      ...{ kv: 12.47, highSideKv: 69, phases: 'ABC', lineType: 'four-wire', distanceKm: 4 },
      ...{
        isMainline: false,
        supply: 'radial',
        limitingAmpacityA: 200,
        regulators: 1,
        capacitorsOnCircuit: 1,
      },
      ...{ circuitPeakKw: 4000, circuitMinimumKw: 1100 },
      sections: [
        { peakKw: 900, minimumKw: null },
        { peakKw: 4000, minimumKw: 1100 },
      ],
      devices: [
        { kind: 'fuse', count: 1, leastInterruptingKa: 1 },
        { kind: 'breaker', count: 1, leastInterruptingKa: 12.5 },
      ],
    });
  });

  it('counts what is in service apart from what is queued, also behind a transformer', () => {
    expect(report(makeStudy())).toMatchObject({
      ...{ existingOnCircuitKw: 100, queuedOnCircuitKw: 500, existingOnBankKw: 100, queuedOnBankKw: 500 },
      ...{ bankKva: 10_000, availableOnBankKw: 9400 },
    });
  });

  it('gives the fault currents as they stand, and how many devices are near their rating', () => {
    const { threePhaseFaultA, nearRating } = report(makeStudy());
    expect(threePhaseFaultA).toBeGreaterThan(1000);
    // The fuse of 1 kA is beyond its rating; the breaker is far from it.
    expect(nearRating).toBe(1);
  });

  it('says where a tie feeds the place from another side, and where nothing feeds it', () => {
    const looped = makeStudy(({ feeder }) => {
      feeder.lines!.push({ id: 'tie', from: 'bus', to: 'b', ...line });
    });
    expect(report(looped).supply).toBe('closed-loop');
    const network = makeStudy(({ feeder }) => {
      feeder.secondaryNetworks = [{ id: 'n', kind: 'spot', nodes: ['b'], peakKw: 300 }];
    });
    expect(report(network).supply).toBe('spot-network');
  });

  it('leaves out what the records do not say', () => {
    const bare = makeStudy(({ feeder }) => {
      for (const key of ['substations', 'circuits', 'sections', 'regulators', 'capacitors'] as const)
        delete feeder[key];
      for (const each of feeder.lines!) {
        delete each.ampacityA;
        delete each.mainline;
      }
    });
    expect(report(bare)).toMatchObject({
      ...{ highSideKv: null, bankKva: null, availableOnBankKw: null, lineType: null, isMainline: null },
      ...{ limitingAmpacityA: null, circuitPeakKw: null, sections: [], stabilityLimited: null },
    });
  });
});
