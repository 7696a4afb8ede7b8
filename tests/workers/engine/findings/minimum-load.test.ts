import { describe, expect, it } from 'vitest';
import type { Inverter } from '../../../../shared/schemas/study.ts';
import type { Section } from '../../../../shared/schemas/study-utility.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { ask, brief, inverter, plant, rulesFor, study } from './screen-studies.ts';

const question = 'minimum-load';

const fixedPv: Partial<Inverter> = { energy: 'photovoltaic', tracking: false };
const figures: Partial<Section> = {
  ...{ minimumKw: 1000, daytimeTrackingKw: 1500, daytimeFixedKw: 2000, minimumIs: 'gross' },
};

/** The outer section has figures, and the whole one so much load that it does not matter. */
function withFigures(more: Partial<Section> = {}, then: (study: ProjectStudy) => void = () => undefined) {
  return (file: ProjectStudy) => {
    const plenty = { minimumKw: 90_000, minimumIs: 'gross' } as const;
    Object.assign(file.feeder.sections![0]!, plenty);
    Object.assign(file.feeder.sections![1]!, figures, more);
    then(file);
  };
}

const without = (...keys: (keyof Section)[]) =>
  withFigures({}, ({ feeder }) => keys.forEach((key) => delete feeder.sections![1]![key]));

describe('Generation against the minimum load of each line section', () => {
  it.each([
    ['fixed photovoltaics', fixedPv, 2000, '10 to 16 h'],
    ['tracking photovoltaics', { ...fixedPv, tracking: true }, 1500, '8 to 18 h'],
    ['photovoltaics that may track', { energy: 'photovoltaic' }, 1500, '8 to 18 h'],
    ['photovoltaics with storage', { ...fixedPv, storage: true }, 1000, 'all hours'],
    ['storage', { energy: 'storage' }, 1000, 'all hours'],
    ['wind', { energy: 'wind' }, 1000, 'all hours'],
    ['what nobody says anything of', {}, 1000, 'all hours'],
  ] as const)('of %s is held against the load of their hours', (_, more, kw, hours) => {
    const [finding] = ask(plant(600, more, withFigures()), question);
    expect(finding).toMatchObject({ element: 'outer', value: (600 / kw) * 100, verdict: 'within' });
    expect(finding!.note).toContain(hours);
  });

  it('takes a machine for one that runs at all hours', () => {
    expect(ask(study(withFigures()), question)[0]).toMatchObject({ value: 200, verdict: 'outside' });
  });

  it('takes the longest hours of all generators there', () => {
    const file = plant(600, fixedPv, (file) => {
      withFigures()(file);
      file.feeder.inverters = [inverter('windmill', 100, { energy: 'wind' })];
    });
    expect(ask(file, question)[0]).toMatchObject({ value: 70, before: 10 });
  });

  it('is outside where generation equals the load, for the rule is strict, and within where a rule is not', () => {
    const file = plant(2000, fixedPv, withFigures());
    expect(ask(file, question)[0]).toMatchObject({ value: 100, verdict: 'outside', comparison: '<' });
    const inclusive = rulesFor(question, {
      limits: [{ limit: 100, comparison: '<=', consequence: 'study' }],
    });
    expect(ask(file, question, inclusive)[0]!.verdict).toBe('within');
    expect(ask(plant(1999.999, fixedPv, withFigures()), question)[0]!.verdict).toBe('within');
  });

  it('does not count again what the load is net of', () => {
    const net = withFigures({ minimumIs: 'net', netOf: ['there'] }, ({ feeder }) => {
      feeder.inverters = [inverter('there', 900, fixedPv), inverter('new', 200, fixedPv)];
    });
    const [finding] = ask(plant(600, fixedPv, net), question);
    expect(finding).toMatchObject({ value: 40, before: 10 });
    expect(finding!.note).toContain('net of there');
  });

  it('holds it against the absolute minimum where the daytime one is not known, if that is enough', () => {
    const daytime = without('daytimeFixedKw', 'daytimeTrackingKw');
    expect(ask(plant(900, fixedPv, daytime), question)[0]).toMatchObject({ value: 90, verdict: 'within' });
    expect(brief(ask(plant(1000, fixedPv, daytime), question))).toContainEqual(['outer', 'needs-data']);
  });

  it.each([
    ['the minimum', without('minimumKw', 'daytimeFixedKw', 'daytimeTrackingKw')],
    ['whether it is gross or net', without('minimumIs')],
    ['what it is net of', withFigures({ minimumIs: 'net' })],
  ])('needs data where %s is not known', (_, change) => {
    expect(brief(ask(plant(600, fixedPv, change), question))).toContainEqual(['outer', 'needs-data']);
  });

  it('is outside where there is no load at all at times', () => {
    const [, finding] = ask(plant(600, fixedPv, withFigures({ daytimeFixedKw: 0 })), question);
    expect(finding).toMatchObject({
      element: 'outer',
      value: null,
      verdict: 'outside',
      consequence: 'study',
    });
  });

  it('is gone through for outer sections too', () => {
    const file = plant(600, fixedPv, (file) => {
      withFigures()(file);
      Object.assign(file.feeder.sections![0]!, { minimumKw: 500, daytimeFixedKw: 500 });
    });
    expect(ask(file, question)[0]).toMatchObject({ element: 'whole', value: 120, verdict: 'outside' });
  });

  it('keeps what is outside in one operating case before a gap in another', () => {
    const file = plant(1200, fixedPv, (file) => {
      withFigures()(file);
      delete file.feeder.sections![1]!.daytimeFixedKw;
      delete file.feeder.sections![1]!.daytimeTrackingKw;
      file.feeder.inverters = [inverter('windmill', 1, { energy: 'wind' })];
      file.feeder.scenarios = [{ id: 'calm', out: ['windmill'] }];
    });
    // With the windmill the absolute minimum is what is asked for; without it the daytime one, which is not known.
    expect(ask(file, question)[0]).toMatchObject({ element: 'outer', verdict: 'outside', value: 120.1 });
  });

  it('counts what may be exported where the rule set says so', () => {
    const file = plant(600, { ...fixedPv, exportKw: 100 }, withFigures());
    expect(ask(file, question, rulesFor(question, { sizeBasis: 'export' }))[0]!.value).toBe(5);
    expect(ask(file, question)[0]!.value).toBe(30);
  });
});
