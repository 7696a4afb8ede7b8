import { describe, expect, it } from 'vitest';
import type { Section } from '../../../../shared/schemas/study-utility.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { ask, brief, plant, rulesFor } from './screen-studies.ts';

const question = 'safety-reliability';

const sound: Partial<Section> = { uniform: true, largestCustomerShare: 0.3, transfers: false };
const calm = (outer: Partial<Section> = {}, then: (study: ProjectStudy) => void = () => undefined) =>
  plant(100, {}, (file) => {
    file.feeder.lines!.forEach((line) => (line.mainline = true));
    file.feeder.sections!.forEach((section) => Object.assign(section, sound));
    Object.assign(file.feeder.sections![1]!, outer);
    then(file);
  });

const lengths =
  (miles: number) =>
  ({ feeder }: ProjectStudy) => {
    feeder.lines!.forEach((line) => (line.km = (miles * 1.609344) / 2));
  };

describe('Safety and reliability of the line sections', () => {
  it('is within where all is known and as it should be', () => {
    const [finding, ...more] = ask(calm(), question);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ element: 'poi', verdict: 'within', unit: 'mi' });
    expect(finding!.value).toBeCloseTo(2 / 1.609344, 12);
    expect(finding!.note).toContain('whole, outer');
  });

  it.each([
    [2.5, '<', 'outside'],
    [2.5, '<=', 'within'],
    [2.49, '<', 'within'],
  ] as const)('at %d miles, %s 2.5, is %s', (miles, comparison, verdict) => {
    const rules = rulesFor(question, { limits: [{ limit: 2.5, comparison, consequence: 'study' }] });
    const file = calm({}, lengths(miles));
    expect(ask(file, question, rules)[0]).toMatchObject({
      verdict,
      consequence: verdict === 'within' ? 'none' : 'study',
    });
  });

  it.each([
    ['a line that is no mainline', false, 'outside'],
    ['a line of which that is not known', undefined, 'needs-data'],
  ] as const)('takes %s on the way for %s', (_, mainline, verdict) => {
    const file = calm({}, ({ feeder }) => {
      delete feeder.lines![0]!.mainline;
      if (mainline !== undefined) feeder.lines![0]!.mainline = mainline;
    });
    const [finding] = ask(file, question);
    expect(finding).toMatchObject({ element: 'poi', verdict, value: null });
    expect(finding!.note).toContain('l1');
  });

  it.each([
    ['load that is not uniform', { uniform: false }, 'not uniform'],
    ['one customer with more than half of the load', { largestCustomerShare: 0.5001 }, '50.01 %'],
    ['transfers', { transfers: true }, 'fed from elsewhere'],
  ])('names a section with %s', (_, differs, words) => {
    const [, finding, ...more] = ask(calm(differs), question);
    expect(more).toEqual([]);
    expect(finding).toMatchObject({ element: 'outer', verdict: 'outside', consequence: 'study' });
    expect(finding!.note).toContain(words);
  });

  it('takes just half of the load for one customer', () => {
    expect(brief(ask(calm({ largestCustomerShare: 0.5 }), question))).toEqual([['poi', 'within']]);
  });

  it.each(['uniform', 'largestCustomerShare', 'transfers'] as const)('needs %s of each section', (key) => {
    const file = calm({}, ({ feeder }) => delete feeder.sections![1]![key]);
    expect(brief(ask(file, question))).toEqual([
      ['poi', 'within'],
      ['outer', 'needs-data'],
    ]);
  });

  it('needs data where the records have no section, or not one of each device', () => {
    const none = calm({}, ({ feeder }) => ((feeder.sections = []), (feeder.devices = [])));
    expect(brief(ask(none, question))).toEqual([
      ['poi', 'within'],
      [undefined, 'needs-data'],
    ]);
    const one = calm({}, ({ feeder }) => void feeder.sections!.pop());
    expect(brief(ask(one, question))).toEqual([
      ['poi', 'within'],
      ['RC-1', 'needs-data'],
    ]);
  });
});
