import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../../shared/schemas/study-result.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { readCase, readJson } from './cases.ts';

const relative = 2e-4;
const absoluteAmps = 0.5;

type Json = null | number | string | { [key: string]: Json };

/** Lists where a result is off an expected one: impedances by their size, all else number by number. */
function listDifferences(got: Json | undefined, expected: Json, path = ''): string[] {
  const differs = `${path}: got ${JSON.stringify(got)}, expected ${JSON.stringify(expected)}`;
  if (typeof expected === 'number') {
    const allowed = Math.max(relative * Math.abs(expected), slack(path));
    return typeof got === 'number' && Math.abs(got - expected) <= allowed ? [] : [differs];
  }
  if (typeof expected !== 'object' || expected === null) return got === expected ? [] : [differs];
  if (typeof got !== 'object' || got === null) return [differs];
  if ('r' in expected) {
    const off = Math.hypot(Number(got.r) - Number(expected.r), Number(got.x) - Number(expected.x));
    return off <= relative * Math.hypot(Number(expected.r), Number(expected.x)) ? [] : [differs];
  }
  return Object.keys(expected).flatMap((key) => listDifferences(got[key], expected[key]!, `${path}/${key}`));
}

/** Only currents have an absolute tolerance; ratios, loadings and percentages have none. */
function slack(path: string): number {
  return path.startsWith('/nodes/') || /(dutyA|availableA)$/.test(path) ? absoluteAmps : 0;
}

describe.each(['random-11', 'random-12', 'random-13', 'random-14'])('%s', (name) => {
  const result = runStudy(readCase(name), proFormaRuleSet);
  const expected = readJson('cases', name, 'expected.json') as StudyResult;

  it.each(['nodes', 'devices', 'project', 'grounding'] as const)(
    'agrees with the independent solver on %s',
    (part) => {
      expect(listDifferences(result[part] as Json, expected[part] as Json)).toEqual([]);
    },
  );

  it('reports every node and device of the file, and none of the project', () => {
    expect(Object.keys(result.nodes)).toEqual(Object.keys(expected.nodes));
    expect(Object.keys(result.devices)).toEqual(Object.keys(expected.devices));
  });

  it('has nothing to warn of', () => {
    expect(result.warnings).toEqual([]);
  });
});
