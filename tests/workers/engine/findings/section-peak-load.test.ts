import { describe, expect, it } from 'vitest';
import { ask, brief, inverter, plant, rulesFor, study } from './screen-studies.ts';

const question = 'section-peak-load';

describe('Generation against the peak load of each line section', () => {
  it('is the worst of the nested sections, with its working', () => {
    const [finding, ...more] = ask(study(), question);
    expect(more).toEqual([]);
    // 2000 kW beyond RC-1 over 8000 kW; beyond CB-1 it is 20 %.
    expect(finding).toMatchObject({ element: 'outer', value: 25, verdict: 'outside' });
    expect(finding!.working!.map(({ result }) => result.symbol)).toEqual([
      ...['P_connected', 'P_project', 'P', 'P_peak', 's'],
    ]);
  });

  it.each([
    ['<=', 'within'],
    ['<', 'outside'],
  ] as const)('at exactly the limit with %s is %s', (comparison, verdict) => {
    const rules = rulesFor(question, { limits: [{ limit: 15, comparison, consequence: 'supplemental' }] });
    expect(ask(plant(1200), question, rules)[0]).toMatchObject({ value: 15, verdict });
  });

  it('is exact at a limit that has no exact share in binary', () => {
    // 560/8000 is 0.07, and 0.07 times 100 is a little more than 7 in a computer.
    const rules = rulesFor(question, {
      limits: [{ limit: 7, comparison: '<=', consequence: 'supplemental' }],
    });
    expect(ask(plant(560), question, rules)[0]).toMatchObject({ value: 7, verdict: 'within' });
  });

  it('compares unrounded', () => {
    expect(ask(plant(1200.0001), question)[0]!.verdict).toBe('outside');
  });

  it('names the operating case that decides', () => {
    const file = plant(100, {}, ({ feeder }) => {
      feeder.nodes.push({ id: 'far', kv: 12.47, phases: 'ABC' });
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l3', from: 'bus', to: 'far' });
      feeder.switches = [{ id: 'tie', from: 'far', to: 'poi', closed: false }];
      feeder.inverters = [inverter('next-door', 900, { node: 'far' })];
      // The neighbour's line is opened at its head, so that this feeder carries it.
      feeder.scenarios = [{ id: 'carry', name: 'Carrying the next', switches: { tie: true }, out: ['l3'] }];
    });
    const [finding] = ask(file, question);
    expect(finding).toMatchObject({ element: 'outer', value: 12.5 });
    expect(finding!.note).toContain('"Carrying the next" decides');
  });

  it('leaves out what is out of service in an operating case', () => {
    const file = plant(100, {}, ({ feeder }) => {
      feeder.inverters = [inverter('there', 700)];
      feeder.scenarios = [{ id: 'less', out: ['there'] }];
    });
    const [finding] = ask(file, question);
    expect(finding!.value).toBe(10);
    expect(finding!.note).toContain('the model as it stands decides');
  });

  it('takes a study where a closed tie goes round every device of a section', () => {
    const file = study(({ feeder }) => {
      feeder.switches = [{ id: 'tie', from: 'bus', to: 'poi', closed: true }];
    });
    const answers = ask(file, question);
    expect(brief(answers)).toEqual([
      ['whole', 'needs-data'],
      ['outer', 'needs-data'],
    ]);
    expect(answers.map(({ consequence }) => consequence)).toEqual(['study', 'study']);
  });

  it('takes a study for the section whose device a tie goes round, and still measures the outer one', () => {
    const file = study(({ feeder }) => {
      feeder.switches = [{ id: 'tie', from: 'mid', to: 'poi', closed: true }];
    });
    const answers = ask(file, question);
    expect(answers.map(({ element, value, consequence }) => [element, value, consequence])).toEqual([
      ['whole', 20, 'supplemental'],
      ['outer', null, 'study'],
    ]);
  });

  it('takes a study where a second source feeds the section from behind', () => {
    const file = study(({ feeder }) => {
      feeder.sources!.push({ id: 'other', node: 'poi', max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 1 } } });
    });
    // The point of interconnection is a source itself then, and no section lies between.
    expect(ask(file, question)[0]!.verdict).toBe('needs-data');
    const between = study(({ feeder }) => {
      feeder.nodes.push({ id: 'far', kv: 12.47, phases: 'ABC' });
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l3', from: 'poi', to: 'far' });
      feeder.sources!.push({ id: 'other', node: 'far', max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 1 } } });
    });
    expect(ask(between, question).map(({ consequence }) => consequence)).toEqual(['study', 'study']);
  });

  it('takes a study where an operating case closes the tie', () => {
    const file = study(({ feeder }) => {
      feeder.switches = [{ id: 'tie', from: 'mid', to: 'poi', closed: false }];
      feeder.scenarios = [{ id: 'both', name: 'Tie closed', switches: { tie: true } }];
    });
    const loop = ask(file, question).find(({ element }) => element === 'outer')!;
    expect(loop).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
    expect(loop.note).toContain('"Tie closed"');
  });

  it('is not led astray by a loop of the feeder next door', () => {
    const file = plant(100, {}, ({ feeder }) => {
      const [line] = feeder.lines!;
      feeder.nodes.push({ id: 'a', kv: 12.47, phases: 'ABC' }, { id: 'b', kv: 12.47, phases: 'ABC' });
      feeder.lines!.push({ ...line!, id: 'n1', to: 'a' }, { ...line!, id: 'n2', to: 'b' });
      feeder.switches = [{ id: 'loop', from: 'a', to: 'b', closed: true }];
      feeder.devices!.push({ id: 'CB-2', branch: 'n1', end: 'from', kind: 'breaker' });
      feeder.sections!.push({ id: 'next-door', device: 'CB-2', peakKw: 10 });
    });
    expect(brief(ask(file, question))).toEqual([['outer', 'within']]);
  });

  it('needs data for a recloser on the way that bounds no section of the records', () => {
    const file = plant(100, {}, ({ feeder }) => void feeder.sections!.pop());
    expect(brief(ask(file, question))).toEqual([
      ['whole', 'within'],
      ['RC-1', 'needs-data'],
    ]);
  });

  it('needs data where no section is known at all', () => {
    const file = plant(100, {}, ({ feeder }) => {
      feeder.sections = [];
      feeder.devices = [];
    });
    expect(brief(ask(file, question))).toEqual([[undefined, 'needs-data']]);
  });

  it('lists a section with an unknown peak beside the one that decides', () => {
    const file = plant(100, {}, ({ feeder }) => delete feeder.sections![0]!.peakKw);
    expect(brief(ask(file, question))).toEqual([
      ['outer', 'within'],
      ['whole', 'needs-data'],
    ]);
  });
});
