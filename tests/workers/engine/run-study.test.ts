import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { StudyStep } from '../../../workers/engine/run-study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { readCase } from './cases.ts';

describe('Running a study', () => {
  it('tells of each step as it begins, and of the end', () => {
    const steps: StudyStep[] = [];
    runStudy(readCase('marrow-lane'), proFormaRuleSet, (step) => steps.push(step));
    expect(steps.map(({ done }) => done)).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 8, 9]);
    expect(new Set(steps.map(({ total }) => total))).toEqual(new Set([9]));
    expect(new Set(steps.map(({ label }) => label)).size).toBe(10);
  });

  it('leaves the study as it was, and gives the same bytes twice', () => {
    const study = readCase('random-13');
    const before = JSON.stringify(study);
    const first = JSON.stringify(runStudy(study, proFormaRuleSet));
    expect(JSON.stringify(study)).toBe(before);
    expect(JSON.stringify(runStudy(study, proFormaRuleSet))).toBe(first);
  });

  it('gives neither project, grounding, findings nor a state after without a project', () => {
    const { project: _, ...study } = readCase('random-11');
    const result = runStudy(study, proFormaRuleSet);
    expect(result).not.toHaveProperty('project');
    expect(result).not.toHaveProperty('grounding');
    expect(result.findings).toEqual([]);
    expect(Object.keys(result.nodes.p0!)).toEqual(['none', 'before', 'minimum']);
    expect(Object.keys(result.devices.d0!)).toEqual(['before']);
  });
});
