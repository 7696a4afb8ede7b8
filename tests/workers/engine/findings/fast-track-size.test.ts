import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { ask, inverter, plant, rulesFor, study } from './screen-studies.ts';

const question = 'fast-track-size';

/** Changes the voltage of everything below the substation transformer. */
function atKv(kv: number, then: (study: ProjectStudy) => void = () => undefined) {
  return (file: ProjectStudy) => {
    for (const node of file.feeder.nodes) if (node.id !== 'grid') node.kv = kv;
    then(file);
  };
}

const onMainline = ({ feeder }: ProjectStudy) => feeder.lines!.forEach((line) => (line.mainline = true));
const listed = { listed: true };

describe('Fast Track size', () => {
  // SGIP 2.1 as amended by Order 792: value from memory, rows read in derived rules as the rule set says.
  it.each([
    [4.16, 500, 500],
    [4.999, 500, 500],
    [5, 2000, 3000],
    [12.47, 2000, 3000],
    [15, 3000, 4000],
    [24.94, 3000, 4000],
    [30, 4000, 5000],
    [34.5, 4000, 5000],
    [69, 4000, 5000],
  ])(
    'at %d kV takes certified inverters of %d kW anywhere and of %d kW on a near mainline',
    (kv, anywhere, near) => {
      const verdicts = (kva: number, change: (study: ProjectStudy) => void) =>
        ask(plant(kva, listed, atKv(kv, change)), question).map(({ verdict, limit }) => [verdict, limit]);
      expect(verdicts(anywhere, () => undefined)).toEqual([['within', anywhere]]);
      expect(verdicts(anywhere + 0.01, () => undefined)).toEqual([['outside', anywhere]]);
      expect(verdicts(near, onMainline)).toEqual([['within', near]]);
      expect(verdicts(near + 0.01, onMainline)).toEqual([['outside', near]]);
    },
  );

  it('is strict where a rule set says so', () => {
    const rules = rulesFor(question, { limits: [{ limit: null, comparison: '<', consequence: 'study' }] });
    expect(ask(plant(2000, listed), question, rules)[0]!.verdict).toBe('outside');
  });

  it('is never open above 69 kV', () => {
    expect(ask(plant(1, listed, atKv(69.1)), question)[0]).toMatchObject({
      verdict: 'outside',
      consequence: 'study',
      value: null,
    });
  });

  it('takes 2.5 electrical circuit miles for near, and no more', () => {
    const lengths = (km: number) => (file: ProjectStudy) => {
      onMainline(file);
      file.feeder.lines!.forEach((line) => (line.km = km / 2));
    };
    const mile = 1.609344;
    expect(ask(plant(3000, listed, lengths(2.5 * mile)), question)[0]!.limit).toBe(3000);
    expect(ask(plant(3000, listed, lengths(2.5001 * mile)), question)[0]!.limit).toBe(2000);
  });

  it('counts the lines up to the substation transformer, and not those beyond', () => {
    const beyond = (named: boolean) => (file: ProjectStudy) => {
      onMainline(file);
      const { feeder } = file;
      feeder.nodes.push({ id: 'plant-bus', kv: 115, phases: 'ABC' });
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'high', from: 'plant-bus', to: 'grid', km: 40 });
      feeder.sources![0]!.node = 'plant-bus';
      if (named) feeder.substations = [{ id: 'yard', transformer: 'bank' }];
    };
    expect(ask(plant(3000, listed, beyond(true)), question)[0]!.limit).toBe(3000);
    // Without a substation on record nobody knows where it stands.
    expect(ask(plant(3000, listed, beyond(false)), question)[0]!.limit).toBe(2000);
  });

  it('counts no line as mainline that is not marked, and says which', () => {
    const one = ask(
      plant(100, listed, ({ feeder }) => (feeder.lines![0]!.mainline = true)),
      question,
    )[0]!;
    expect(one.limit).toBe(2000);
    expect(one.note).toContain('whether l2 is on a mainline is not known');
    const other = (file: ProjectStudy) => {
      onMainline(file);
      file.feeder.lines![0]!.mainline = false;
    };
    expect(ask(plant(100, listed, other), question)[0]!.note).toContain('not all on a mainline (l1)');
  });

  it('takes machines up to 2 MW wherever they are, and of a mixture the smaller size', () => {
    const size = (kva: number) =>
      ask(
        study((file) => {
          onMainline(file);
          file.project.machines![0]!.kva = kva;
        }),
        question,
      )[0];
    expect(size(2000)).toMatchObject({ verdict: 'within', value: 2000, limit: 2000 });
    expect(size(2001)).toMatchObject({ verdict: 'outside' });
    const mixed = study((file) => {
      onMainline(file);
      file.project.machines![0]!.kva = 1500;
      file.project.inverters = [inverter('roof', 501, listed)];
    });
    expect(ask(mixed, question)[0]).toMatchObject({ verdict: 'outside', value: 2001, limit: 2000 });
  });

  it.each([
    [false, 'has to review its design'],
    [undefined, 'is not known'],
  ])('needs data of an inverter that is listed: %s', (value, note) => {
    const more = value === undefined ? {} : { listed: value };
    const [finding] = ask(plant(100, more), question);
    expect(finding).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
    expect(finding!.note).toContain(note);
  });

  it('takes the standard that an inverter is listed to for a certificate', () => {
    expect(ask(plant(100, { listing: { standard: 'UL 1741' } }), question)[0]!.verdict).toBe('within');
  });

  it('needs data without a table, and where the table has no row', () => {
    const { fastTrack, ...bare } = rulesFor(question);
    expect(ask(plant(100, listed), question, bare)[0]!.verdict).toBe('needs-data');
    const gap = { ...bare, fastTrack: { ...fastTrack!, rows: proFormaRuleSet.fastTrack.rows.slice(2) } };
    expect(ask(plant(100, listed), question, gap)[0]!.verdict).toBe('needs-data');
  });

  it('does not apply to a project without a generator', () => {
    const file = study(({ project }) => delete project.machines);
    expect(ask(file, question)[0]!.verdict).toBe('not-applicable');
  });

  it("does not count what others have here, nor limits of the project's export", () => {
    const file = plant(1500, { ...listed, exportKw: 10 }, ({ feeder }) => {
      feeder.inverters = [inverter('there', 1800)];
    });
    expect(ask(file, question)[0]).toMatchObject({ verdict: 'within', value: 1500 });
    expect(ask(file, question, rulesFor(question, { sizeBasis: 'export' }))[0]!.value).toBe(10);
  });
});
