import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { listProblems } from '../../../workers/engine/problems.ts';
import { readRuleSet } from '../../../workers/engine/read-rule-set.ts';
import { holderOf } from './spoiling.ts';

/** The lines that the shipped rule set is answered with after a change; '' where it is read as it is written. */
function linesOf(pointer?: string, value?: unknown): string {
  const file: unknown = JSON.parse(JSON.stringify(proFormaRuleSet));
  if (pointer !== undefined) {
    const { holder, key } = holderOf(file, pointer);
    if (value === undefined) delete holder![key];
    else holder![key] = value;
  }
  const read = readRuleSet(JSON.stringify(file));
  if ('problems' in read) return listProblems(read.problems).join('\n');
  expect(read.ruleSet).toEqual(file);
  return '';
}

describe('The Fast Track table of a rule set', () => {
  it('is read as it is shipped, and may be missing', () => {
    expect(linesOf()).toBe('');
    expect(linesOf('/fastTrack')).toBe('');
  });

  it.each([
    ['/fastTrack/rows', [], 'got a list of 0, expected a list of at least 1'],
    ['/fastTrack/rows/0/belowKv', 0, 'got 0, expected a number above 0 or null'],
    ['/fastTrack/rows/0/anywhereKw', -1, 'got -1, expected a number of 0 or more'],
    ['/fastTrack/rows/1/mainlineKw', undefined, 'got nothing, expected a number of 0 or more'],
    ['/fastTrack/rows/2/readOrMemory', 'heard', 'got "heard", expected "read" or "memory"'],
    ['/fastTrack/mainlineMiles', '2.5', 'got "2.5", expected a number of 0 or more'],
    ['/fastTrack/maximumKv', 0, 'got 0, expected a number above 0'],
    ['/fastTrack/source', '', 'got "", expected a text that is not empty'],
  ])('is refused at %s with %j', (pointer, value, line) => {
    expect(linesOf(pointer, value)).toBe(`${pointer}: ${line}`);
  });
});
