import { describe, expect, it } from 'vitest';
import type { QuestionId } from '../../../../shared/schemas/findings.ts';
import type { Study } from '../../../../shared/schemas/study.ts';
import { describeWeakest } from '../../../../workers/engine/findings/weakest-source.ts';
import { answersTo, handStudy } from './reach-studies.ts';

const questions = [
  'short-circuit-ratio',
  'rapid-voltage-change',
  'ground-reach',
  'phase-reach',
] as const satisfies QuestionId[];

const said = 'No minimum strength of source utility is recorded: the maximum was used in its place.';

const withPlant = (change: (study: Study) => void = () => {}) =>
  handStudy((study) => {
    study.project!.inverters = [{ id: 'i', node: 'mid', phases: 'ABC', kva: 500, faultCurrentPu: 1.2 }];
    change(study);
  });

describe('What is computed with the weakest source', () => {
  it.each(questions)('says for %s where no minimum strength is recorded, and only there', (id) => {
    const unknown = withPlant(({ feeder }) => delete feeder.sources![0]!.min);
    const found = answersTo(id, unknown);
    expect(found.length).toBeGreaterThan(0);
    for (const { note } of found) expect(note).toContain(said);
    for (const { note } of answersTo(id, withPlant())) expect(note).not.toContain('minimum strength');
  });

  it('says it of a fault next door only where the weakest source decides', () => {
    const unknown = withPlant(({ feeder }) => delete feeder.sources![0]!.min);
    const [finding] = answersTo('sympathetic-trip', unknown);
    expect(finding!.note!.includes(said)).toBe(finding!.note!.includes('weakest source'));
  });

  it('names a few sources and counts many', () => {
    const study = withPlant();
    const [source] = study.feeder.sources!;
    const without = (count: number) =>
      Array.from({ length: count }, (_, index) => ({ id: `S${index + 1}`, node: 'bus', max: source!.max }));
    const say = (count: number) => {
      study.feeder.sources = [source!, ...without(count)];
      return describeWeakest({ study })[0];
    };
    expect(say(0)).toBeUndefined();
    expect(say(2)).toContain('sources S1, S2 is');
    expect(say(4)).toContain('of 4 sources is');
  });
});
