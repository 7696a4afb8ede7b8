import { expect } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { QuestionId } from '../../../../shared/schemas/findings.ts';
import type { Rule, RuleSet } from '../../../../shared/schemas/rule-sets.ts';
import type { Project, Study } from '../../../../shared/schemas/study.ts';
import type { Answered } from '../../../../workers/engine/findings/judge.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import { answerQuestions } from '../../../../workers/engine/findings/questions.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { checkedStudy, readCase } from '../cases.ts';

/* Studies for the questions about islands: Marrow Lane, worked by hand in its README, with a machine or with inverters. */

type ProjectStudy = Study & { project: Project };

const marrowLane = readCase('marrow-lane');

/** Marrow Lane with its machine: 2 MVA behind a step-up with the delta on the feeder. */
export function machineStudy(change: (study: ProjectStudy) => void = () => undefined): ProjectStudy {
  const study = structuredClone(marrowLane) as ProjectStudy;
  change(study);
  return checkedStudy(study) as ProjectStudy;
}

/** With 2 MVA of inverters in its place, all listed, and minimum loads: 4 MW beyond CB-1, 2 MW of it beyond RC-1. */
export function inverterStudy(change: (study: ProjectStudy) => void = () => undefined): ProjectStudy {
  return machineStudy((study) => {
    const { feeder, project } = study;
    delete project.machines;
    project.inverters = [
      {
        id: 'plant',
        node: 'lv',
        phases: 'ABC',
        kva: 2000,
        faultCurrentPu: 1.2,
        listing: {
          standard: 'UL 1741 SB',
          category: 'III',
          profile: 'area default',
          trdPercent: 3,
          antiIslanding: true,
        },
      },
    ];
    Object.assign(feeder.sections![0]!, { minimumKw: 4000, minimumIs: 'gross', groundedLoadShare: 1 });
    Object.assign(feeder.sections![1]!, { minimumKw: 2000, minimumIs: 'gross', groundedLoadShare: 1 });
    change(study);
  });
}

/** The shipped rules for some questions, and what differs in that of the first. */
export function rulesFor(ids: readonly QuestionId[], differs: Partial<Rule> = {}): RuleSet {
  const { rules }: RuleSet = proFormaRuleSet;
  const asked = ids.map((id, place) => [id, { ...rules[id], ...(place === 0 ? differs : {}) }] as const);
  return { ...proFormaRuleSet, rules: Object.fromEntries(asked) };
}

/** Answers the first of some questions; the steps of every answer are computed again from what they print. */
export function ask(
  study: ProjectStudy,
  ids: readonly [QuestionId, ...QuestionId[]],
  differs?: Partial<Rule>,
): Answered[] {
  const answers = answerQuestions(makeScreening(study, rulesFor(ids, differs)));
  for (const { working = [], value } of answers) {
    expect(listFaults(working)).toEqual([]);
    if (value !== null) expect(working.at(-1)!.result.value).toBe(value);
  }
  return answers.filter(({ id }) => id === ids[0]);
}

/** The rule's one limit, at a value, inclusive or strict. */
export function limitAt(limit: number, comparison: '<=' | '<' = '<='): Partial<Rule> {
  return { limits: [{ limit, comparison, consequence: 'study' }] };
}

/** Joins the place to a second source, so that no device alone cuts it off. */
export function closeTie({ feeder }: Study): void {
  const [first] = feeder.sources!;
  feeder.nodes.push({ id: 'other-bus', kv: 12.47, phases: 'ABC' });
  feeder.sources!.push({ ...first!, id: 'other', node: 'other-bus' });
  feeder.switches = [{ id: 'tie', from: 'poi', to: 'other-bus', closed: true }];
}

/** Moves the project, as an inverter of these phases, to a lateral beyond a recloser of its own. */
export function moveToLateral(study: ProjectStudy, phases: string): void {
  const { feeder } = study;
  feeder.nodes.push({ id: 'tap', kv: 12.47, phases });
  feeder.lines!.push({ ...feeder.lines![0]!, id: 'l3', from: 'poi', to: 'tap', phases });
  feeder.devices!.push({ id: 'RC-2', branch: 'l3', end: 'from', kind: 'recloser', interruptingKa: 6 });
  feeder.sections!.push({ ...feeder.sections![1]!, id: 'lateral', device: 'RC-2' });
  const [plant] = study.project.inverters!;
  study.project = { id: 'roof', node: 'tap', inverters: [{ ...plant!, node: 'tap', phases }] };
}
