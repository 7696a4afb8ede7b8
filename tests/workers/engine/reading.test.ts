import { describe, expect, it } from 'vitest';
import type { Study } from '../../../shared/schemas/study.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { readJson } from './cases.ts';
import type { Change } from './spoiling.ts';
import { soundText, spoil } from './spoiling.ts';

type Spoilt = Change & { name: string; at: string; expected: string };

const spoilt = readJson('invalid', 'spoilt.json') as Spoilt[];

function problemsOf(text: string) {
  const read = readStudy(text);
  return 'problems' in read ? read.problems.first : [];
}

const problemsOfChange = (change: Change) => problemsOf(JSON.stringify(spoil(change)));

describe('Reading a study file', () => {
  it('takes a sound one', () => {
    expect(problemsOf(soundText)).toEqual([]);
  });

  it.each(spoilt)('names the place and what was expected: $name', (change) => {
    const problems = problemsOfChange(change);
    expect(problems.map(({ pointer }) => pointer)).toContain(change.at);
    const { expected, got } = problems.find(({ pointer }) => pointer === change.at)!;
    expect(expected).toContain(change.expected);
    expect(got).not.toBe('');
  });

  it('refuses numbers that JSON can write and nobody can compute with', () => {
    const problems = problemsOf(soundText.replace('"baseMva": 10', '"baseMva": 1e999'));
    expect(problems).toEqual([{ pointer: '/baseMva', got: 'Infinity', expected: 'a number above 0' }]);
  });

  it.each(['', '{', '[1,', '\u0000', '"text"', 'null', '[]', '3', '[NaN]', '{"a":Infinity}', "{'a':1}"])(
    'answers %j with one problem of the whole file',
    (text) => {
      expect(problemsOf(text).map(({ pointer }) => pointer)).toEqual(['/']);
    },
  );

  it('takes a byte order mark in front', () => {
    expect(problemsOf(`\uFEFF${soundText}`)).toEqual([]);
  });

  it('takes the last of two values for one key, as JSON.parse does', () => {
    expect(problemsOf(soundText.replace('"baseMva": 10', '"baseMva": -1, "baseMva": 10'))).toEqual([]);
    const problems = problemsOf(soundText.replace('"baseMva": 10', '"baseMva": 10, "baseMva": -1'));
    expect(problems.map(({ pointer }) => pointer)).toEqual(['/baseMva']);
  });

  it('reports every problem of one kind, not the first alone', () => {
    const problems = problemsOfChange({ set: { '/feeder/lines/0/km': -1, '/feeder/lines/1/km': -1 } });
    expect(problems.map(({ pointer }) => pointer)).toEqual(['/feeder/lines/0/km', '/feeder/lines/1/km']);
  });

  it('keeps the first two hundred of a million problems, and counts all', () => {
    const read = readStudy(`{"feeder":{"nodes":[${'1,'.repeat(1_000_000)}1]}}`);
    if (!('problems' in read)) throw new Error('Expected a refusal.');
    expect(read.problems.first).toHaveLength(200);
    expect(read.problems.length).toBe(1_000_001 + 4);
  });

  it.each([
    ['a\nb', '/feeder/a\\nb'],
    ['a\u2028b\u0085', '/feeder/a\\u2028b\\u0085'],
    ['\u001b[31m\u202e', '/feeder/\\u001b[31m\\u202e'],
    ['\ud800', '/feeder/\\ud800'],
    ['a~b/c', '/feeder/a~0b~1c'],
    ['x'.repeat(1000), `/feeder/${'x'.repeat(200)}…`],
  ])('keeps a problem on one line and says plainly where it is when a field is called %j', (key, pointer) => {
    const file = spoil({}) as { feeder: Record<string, unknown> };
    file.feeder[key] = 1;
    expect(problemsOf(JSON.stringify(file)).map((problem) => problem.pointer)).toEqual([pointer]);
  });

  it.each(['__proto__', 'constructor', 'toString', '\ud800', 'é\u0301', 'x'.repeat(100_000), ' ', '0'])(
    'keeps an id that JavaScript or a terminal has other uses for',
    (id) => {
      expect(problemsOf(soundText.replaceAll('"leaf"', JSON.stringify(id)))).toEqual([]);
    },
  );

  it('walks a lateral of fifty thousand nodes in one chain, and finds the line that closes it to a loop', () => {
    const file = spoil({}) as Study;
    const { nodes, lines } = file.feeder;
    for (let index = 0; index < 50_000; index++) {
      const id = `chain-${index}`;
      const from = index === 0 ? 'mid' : `chain-${index - 1}`;
      nodes.push({ id, kv: 12.47, phases: 'B' });
      lines!.push({ ...lines![0]!, id: `line-${index}`, from, to: id, phases: 'B' });
    }
    expect(problemsOf(JSON.stringify(file))).toEqual([]);
    lines!.push({ ...lines!.at(-1)!, id: 'last', from: 'chain-49999', to: 'bus' });
    expect(problemsOf(JSON.stringify(file)).map(({ pointer }) => pointer)).toEqual(['/feeder/lines/50004']);
  });
});
