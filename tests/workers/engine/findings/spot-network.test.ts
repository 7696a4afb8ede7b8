import { describe, expect, it } from 'vitest';
import type { SecondaryNetwork } from '../../../../shared/schemas/study-utility.ts';
import { ask, inverter, plant, rulesFor, study } from './screen-studies.ts';

const question = 'spot-network';

const network = (peakKw?: number, kind: SecondaryNetwork['kind'] = 'spot') => {
  return { id: 'block', kind, nodes: ['poi'], ...(peakKw === undefined ? {} : { peakKw }) };
};
const on = (kva: number, peakKw?: number, kind?: SecondaryNetwork['kind']) =>
  plant(kva, {}, ({ feeder }) => (feeder.secondaryNetworks = [network(peakKw, kind)]));

describe('A project on a spot network', () => {
  it.each([
    [30, 600, 'within', 30],
    [30.01, 600, 'outside', 30],
    [50, 5000, 'within', 50],
    [50.01, 5000, 'outside', 50],
  ])('of %d kW, with a peak of %d kW, is %s: at most %d kW', (kva, peakKw, verdict, limit) => {
    expect(ask(on(kva, peakKw), question)).toMatchObject([{ element: 'block', verdict, limit, value: kva }]);
  });

  it('is outside at exactly the limit where the rule is strict', () => {
    const rules = rulesFor(question, {
      limits: [{ limit: 50, comparison: '<', consequence: 'supplemental' }],
    });
    expect(ask(on(30, 600), question, rules)[0]!.verdict).toBe('outside');
  });

  it('counts all generation on the network, and what is stepped down from it', () => {
    const file = plant(10, {}, ({ feeder }) => {
      feeder.secondaryNetworks = [{ ...network(800), nodes: ['mid', 'poi'] }];
      feeder.nodes.push({ id: 'shop', kv: 0.208, phases: 'ABC' });
      feeder.transformers!.push({ ...feeder.transformers![0]!, id: 'shop-step', from: 'mid', to: 'shop' });
      feeder.inverters = [
        inverter('shop-roof', 20, { node: 'shop' }),
        inverter('elsewhere', 500, { node: 'bus' }),
      ];
    });
    expect(ask(file, question)[0]).toMatchObject({ value: 30, before: 20, limit: 40, verdict: 'within' });
  });

  it('needs data where the peak load is not known, unless it is too large for any', () => {
    expect(ask(on(10), question)[0]).toMatchObject({ verdict: 'needs-data', value: null });
    expect(ask(on(60), question)[0]).toMatchObject({ verdict: 'outside', value: 60, limit: 50 });
  });

  it('is for inverters only', () => {
    const file = study(({ feeder }) => (feeder.secondaryNetworks = [network(90_000)]));
    expect(ask(file, question)[0]).toMatchObject({ verdict: 'outside', value: null });
  });

  it('takes a study on an area network, however small', () => {
    expect(ask(on(1, 90_000, 'area'), question)[0]).toMatchObject({
      verdict: 'outside',
      consequence: 'study',
    });
  });

  it('does not apply where the place is on no network', () => {
    expect(ask(plant(10), question)[0]!.verdict).toBe('not-applicable');
    const next = plant(10, {}, ({ feeder }) => {
      feeder.secondaryNetworks = [{ ...network(10), nodes: ['bus'] }];
    });
    expect(ask(next, question)[0]!.verdict).toBe('not-applicable');
  });
});
