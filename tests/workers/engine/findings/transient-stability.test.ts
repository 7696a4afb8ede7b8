import { describe, expect, it } from 'vitest';
import type { Substation } from '../../../../shared/schemas/study-utility.ts';
import { ask, inverter, plant, rulesFor } from './screen-studies.ts';

const question = 'transient-stability';

const posted: Substation = { id: 'yard', transformer: 'bank', stabilityLimited: true };
const at = (kva: number, differs: Partial<Substation> = {}) =>
  plant(kva, {}, ({ feeder }) => {
    feeder.substations = [{ ...posted, ...differs }];
    feeder.inverters = [inverter('there', 3000, { node: 'bus' })];
  });

describe('Transient stability', () => {
  it.each([
    [2000, '<=', 'within'],
    [2000, '<', 'outside'],
    [2000.01, '<=', 'outside'],
  ] as const)('with %d kW besides 8 MW, %s 10 MW, is %s', (kva, comparison, verdict) => {
    const rules = rulesFor(question, { limits: [{ limit: 10, comparison, consequence: 'supplemental' }] });
    const [finding] = ask(at(kva, { transmissionSideKw: 5000 }), question, rules);
    expect(finding).toMatchObject({ element: 'yard', verdict, unit: 'MW', before: 8 });
    expect(finding!.value).toBeCloseTo((8000 + kva) / 1000, 12);
  });

  it('is within where no limitation is posted, whatever the size', () => {
    const [finding] = ask(at(50_000, { stabilityLimited: false }), question);
    expect(finding).toMatchObject({ verdict: 'within', value: null, consequence: 'none' });
    expect(finding!.note).toContain('No transient-stability limitation');
  });

  it('needs data where nobody knows whether one is posted, or what else generates there', () => {
    const { stabilityLimited: _, ...unknown } = posted;
    const file = plant(100, {}, ({ feeder }) => (feeder.substations = [unknown]));
    expect(ask(file, question)[0]!.verdict).toBe('needs-data');
    expect(ask(at(100), question)[0]).toMatchObject({ verdict: 'needs-data', value: null });
    expect(ask(plant(100), question)[0]!.verdict).toBe('needs-data');
  });

  it('is outside where the generation of the model alone is too much', () => {
    expect(ask(at(7001), question)[0]).toMatchObject({ verdict: 'outside', value: 10.001 });
  });

  it('asks of the substation whose transformer is on the way', () => {
    const file = plant(100, {}, ({ feeder }) => {
      feeder.substations = [
        { id: 'other', stabilityLimited: false },
        { ...posted, transmissionSideKw: 0 },
      ];
    });
    expect(ask(file, question)[0]).toMatchObject({ element: 'yard', verdict: 'within', value: 0.1 });
    const neither = plant(100, {}, ({ feeder }) => {
      feeder.substations = [
        { id: 'one', stabilityLimited: false },
        { id: 'two', stabilityLimited: false },
      ];
    });
    expect(ask(neither, question)[0]!.verdict).toBe('needs-data');
  });
});
