import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { computeStudy } from '../../../workers/compute-study.ts';
import { listNotFinite } from '../../../workers/engine/finite-result.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { fixtures, readCase } from './cases.ts';

describe('A result that is not made of finite numbers', () => {
  it('names each place by its pointer', () => {
    const result = { nodes: { 'a/b~c': { z1: { r: NaN, x: 1 } } }, list: [0, null, -Infinity], text: 'NaN' };
    expect(listNotFinite(result).first.map(({ pointer, got }) => [pointer, got])).toEqual([
      ['/nodes/a~1b~0c/z1/r', 'NaN'],
      ['/list/2', '-Infinity'],
    ]);
  });

  it('is none of a sound study, with its open circuits and unknown values', () => {
    for (const name of ['marrow-lane', 'random-14']) {
      expect(listNotFinite(runStudy(readCase(name), proFormaRuleSet)).first).toEqual([]);
    }
  });

  it('is not come to by a transformer of vanishing size: the study is refused where that size stands', () => {
    const study = readFileSync(join(fixtures, 'invalid', 'vanishing-transformer.json'));
    const answer = computeStudy(study, proFormaRuleSet);
    if (answer.kind !== 'refused') throw new Error('Expected no result.');
    expect(answer.problems[0]).toMatch(/^\/project\/transformers\/0\/kva: got 1e-300, expected/);
  });
});
