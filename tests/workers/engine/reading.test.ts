import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { fixtures, readJson } from './cases.ts';

type Spoilt = {
  name: string;
  set?: Record<string, unknown>;
  remove?: string[];
  at: string;
  expected: string;
};

const base = readFileSync(join(fixtures, 'invalid', 'base.json'), 'utf8');
const spoilt = readJson('invalid', 'spoilt.json') as Spoilt[];

/** Finds what holds a JSON pointer's last key. */
function holderOf(file: unknown, pointer: string): { holder: Record<string, unknown>; key: string } {
  const keys = pointer.split('/').slice(1);
  const key = keys.pop()!;
  const holder = keys.reduce((value, next) => (value as Record<string, unknown>)[next], file);
  return { holder: holder as Record<string, unknown>, key };
}

function spoil({ set = {}, remove = [] }: Spoilt): string {
  const file: unknown = JSON.parse(base);
  for (const [pointer, value] of Object.entries(set)) {
    const { holder, key } = holderOf(file, pointer);
    holder[key] = value;
  }
  for (const pointer of remove) {
    const { holder, key } = holderOf(file, pointer);
    if (Array.isArray(holder)) holder.splice(Number(key), 1);
    else delete holder[key];
  }
  return JSON.stringify(file);
}

function problemsOf(text: string) {
  const read = readStudy(text);
  return 'problems' in read ? read.problems : [];
}

describe('Reading a study file', () => {
  it('takes a sound one', () => {
    expect(problemsOf(base)).toEqual([]);
  });

  it.each(spoilt)('names the place and what was expected: $name', (change) => {
    const problems = problemsOf(spoil(change));
    expect(problems.map(({ pointer }) => pointer)).toContain(change.at);
    const { expected, got } = problems.find(({ pointer }) => pointer === change.at)!;
    expect(expected).toContain(change.expected);
    expect(got).not.toBe('');
  });

  it('refuses numbers that JSON can write and nobody can compute with', () => {
    const problems = problemsOf(base.replace('"baseMva": 10', '"baseMva": 1e999'));
    expect(problems).toEqual([{ pointer: '/baseMva', got: 'Infinity', expected: 'a number above 0' }]);
  });

  it.each(['', '{', '[1,', '\u0000', '"text"', 'null', '[]', '3'])('answers %j with a problem', (text) => {
    expect(problemsOf(text)).not.toEqual([]);
  });

  it('takes a byte order mark in front', () => {
    expect(problemsOf(`\uFEFF${base}`)).toEqual([]);
  });

  it('reports every problem of one kind, not the first alone', () => {
    const change = {
      name: '',
      set: { '/feeder/lines/0/km': -1, '/feeder/lines/1/km': -1 },
      at: '',
      expected: '',
    };
    expect(problemsOf(spoil(change)).map(({ pointer }) => pointer)).toEqual([
      '/feeder/lines/0/km',
      '/feeder/lines/1/km',
    ]);
  });

  it('keeps every problem on one line, whatever a field is called', () => {
    const change = { name: '', set: { '/feeder/a\nb': 1 }, at: '', expected: '' };
    expect(problemsOf(spoil(change))[0]!.pointer).toBe('/feeder/a\\nb');
  });

  it('keeps an id that JavaScript has other uses for', () => {
    expect(problemsOf(base.replaceAll('"leaf"', '"__proto__"'))).toEqual([]);
  });

  it('never throws, whatever value stands anywhere in the file', () => {
    const pointers: string[] = [];
    const walk = (value: unknown, pointer: string) => {
      if (pointer !== '') pointers.push(pointer);
      if (typeof value !== 'object' || value === null) return;
      for (const [key, inner] of Object.entries(value)) walk(inner, `${pointer}/${key}`);
    };
    walk(JSON.parse(base), '');
    const anyPlace = fc.constantFrom(...pointers);
    fc.assert(
      fc.property(anyPlace, fc.jsonValue(), (pointer, value) => {
        readStudy(spoil({ name: '', set: { [pointer]: value }, at: '', expected: '' }));
      }),
      { numRuns: 500 },
    );
  });
});
