import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { Problems } from '../../../workers/engine/problems.ts';
import { readRuleSet } from '../../../workers/engine/read-rule-set.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { wholeFile } from '../../../workers/engine/shape.ts';
import { checkStudyShape } from '../../../workers/engine/study-shape.ts';
import { writeResult } from '../../../workers/engine/write-result.ts';
import { holderOf, listPointers, soundText, spoil } from './spoiling.ts';

/* Whatever is in a file: an answer, no exception. The seed is fixed; a failure prints how to repeat it. */

const settings = { seed: 4, interruptAfterTimeLimit: 20_000 };
const patience = 60_000;

const pointers = listPointers(JSON.parse(soundText));
const ids = ['grid', 'bus', 'mid', 'end', 'pair', 'leaf', 'lv', 'l1', 'main', 'solar', 'plant', '__proto__'];

const oddNumber = fc.constantFrom(
  ...[0, -0, 1, -1, 1e308, -1e308, 1e15, 1e-15, 1e-12, 5e-324, 1e-300, 2 ** 53, 0.1 + 0.2, 90, 360],
);
const oddText = fc.constantFrom(
  ...[
    '',
    'ABC',
    'A',
    'BA',
    'constructor',
    '\ud800',
    '\u2028',
    'solid',
    'YNd1',
    'Yy0',
    'x'.repeat(5000),
    ...ids,
  ],
);
const oddValue = fc.oneof(
  oddNumber,
  oddText,
  fc.boolean(),
  fc.constantFrom(null, [], {}, [[[[]]]], { r: 0, x: 0 }, { r: 1e-12, x: -1e15 }, [1e308, 1e308]),
  fc.jsonValue({ maxDepth: 2 }),
  // A part of the file itself at a place of another kind: elements twice, lists in lists.
  fc.constantFrom(...pointers).map((pointer) => {
    const { holder, key } = holderOf(JSON.parse(soundText), pointer);
    return holder?.[key];
  }),
);
const change = fc.record({
  set: fc.dictionary(fc.constantFrom(...pointers), oddValue, { minKeys: 1, maxKeys: 4 }),
  remove: fc.array(fc.constantFrom(...pointers), { maxLength: 2 }),
});

/** Values that a check lets pass more often: the solver's turn. */
const allowedNumber = fc.constantFrom(1e-15, 1e-12, 1e-6, 1e-3, 1, 1e3, 1e6, 1e12, 1e15);
const numberPointers = pointers.filter((pointer) => {
  const { holder, key } = holderOf(JSON.parse(soundText), pointer);
  return typeof holder?.[key] === 'number' && !pointer.includes('position');
});
const allowedChange = fc.record({
  set: fc.dictionary(fc.constantFrom(...numberPointers), allowedNumber, { minKeys: 1, maxKeys: 12 }),
  remove: fc.array(fc.constantFrom('/project', '/feeder/machines', '/feeder/inverters'), { maxLength: 2 }),
});

const tokens = [
  '{',
  '}',
  '[',
  ']',
  ',',
  ':',
  '"',
  '\\',
  'NaN',
  '-',
  '1e999',
  'null',
  '\u0000',
  '\ud800',
  '\uFEFF',
];
const textChange = fc.record({
  at: fc.nat({ max: soundText.length }),
  cut: fc.oneof(fc.nat({ max: 5 }), fc.nat({ max: soundText.length })),
  token: fc.oneof(fc.constantFrom('', ...tokens), fc.string({ maxLength: 5 })),
});

function expectAnswer(text: string): 'refused' | 'computed' {
  const read = readStudy(text);
  if ('problems' in read) {
    expect(read.problems.length).toBeGreaterThan(0);
    for (const { pointer, got, expected } of read.problems.first) {
      expect(pointer).toMatch(/^\//);
      expect(got).not.toBe('');
      // One line each, for any reader of lines.
      expect(`${pointer}${got}${expected}`).not.toMatch(/[\p{Cc}\p{Zl}\p{Zp}\p{Surrogate}]/u);
    }
    return 'refused';
  }
  const result = runStudy(read.study, proFormaRuleSet);
  const written = [...writeResult(result)].join('');
  expect(written).toBe(`${JSON.stringify(result)}\n`);
  return 'computed';
}

describe('A spoilt study file', () => {
  it(
    'gets an answer whatever values stand where others should',
    () => {
      fc.assert(
        fc.property(change, (some) => void expectAnswer(JSON.stringify(spoil(some)))),
        { ...settings, numRuns: 1500 },
      );
    },
    patience,
  );

  it(
    'is refused by the quick look exactly when there is something to note',
    () => {
      fc.assert(
        fc.property(fc.oneof(change, allowedChange), (some) => {
          const file = spoil(some);
          const problems = new Problems();
          checkStudyShape(file, wholeFile, problems);
          expect(checkStudyShape.accepts(file)).toBe(problems.length === 0);
        }),
        { ...settings, numRuns: 3000 },
      );
    },
    patience,
  );

  it(
    'gets an answer whatever is cut out of its text or put in',
    () => {
      fc.assert(
        fc.property(textChange, ({ at, cut, token }) => {
          expectAnswer(soundText.slice(0, at) + token + soundText.slice(at + cut));
        }),
        { ...settings, numRuns: 1500 },
      );
    },
    patience,
  );

  it(
    'is computed without an exception when its numbers are merely out of the ordinary',
    () => {
      const answers = new Set<string>();
      fc.assert(
        fc.property(allowedChange, (some) => void answers.add(expectAnswer(JSON.stringify(spoil(some))))),
        { ...settings, numRuns: 500 },
      );
      expect(answers).toContain('computed');
    },
    patience,
  );

  it(
    'gets an answer when it is something else altogether',
    () => {
      fc.assert(
        fc.property(fc.oneof(fc.json(), fc.string()), (text) => void expectAnswer(text)),
        { ...settings, numRuns: 500 },
      );
    },
    patience,
  );
});

describe('A spoilt rule set', () => {
  it(
    'gets an answer whatever stands in it',
    () => {
      const rulePointers = listPointers(proFormaRuleSet);
      fc.assert(
        fc.property(fc.constantFrom(...rulePointers), oddValue, (pointer, value) => {
          const rules: unknown = structuredClone(proFormaRuleSet);
          const { holder, key } = holderOf(rules, pointer);
          holder![key] = value;
          const read = readRuleSet(JSON.stringify(rules));
          if ('problems' in read) expect(read.problems.length).toBeGreaterThan(0);
        }),
        { ...settings, numRuns: 500 },
      );
    },
    patience,
  );
});
