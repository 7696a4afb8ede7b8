import { describe, expect, it } from 'vitest';
import type { NodeResult, StudyResult } from '../../../shared/schemas/study-result.ts';
import { writeResult } from '../../../workers/engine/write-result.ts';

const currents = { lineLine: 2 / 3, lineLineGround: null, lineLineGroundEarth: 1e-7, lineGround: 1e21 };
const state = { ...currents, threePhase: 0.1 + 0.2, z1: { r: -0, x: Number.NaN }, z0: null };
const node: NodeResult = {
  none: state,
  before: state,
  minimum: { threePhase: 1, lineGround: 2, lineLine: 3 },
};

function makeResult(ids: readonly string[]): StudyResult {
  return {
    format: 'feederwright.result/1',
    nodes: Object.fromEntries(ids.map((id) => [id, node])),
    devices: {},
    findings: [],
    warnings: ['One "quoted"\n'],
  };
}

describe('Writing a result', () => {
  it.each<[string, StudyResult]>([
    ['no node', makeResult([])],
    ['one node', makeResult(['bus'])],
    [
      'ids that JavaScript treats in its own way',
      makeResult(['b', '10', '9', '__proto__', '"', '\ud800', '', 'é']),
    ],
    ['members that are undefined', { ...makeResult(['bus']), project: undefined, lines: undefined }],
    [
      'lines and a project',
      { ...makeResult(['bus']), lines: {}, grounding: { connected: null, island: null } },
    ],
    ['thousands of nodes', makeResult(Array.from({ length: 5000 }, (_, index) => `node ${index}`))],
  ])('gives what JSON.stringify gives, and a line end: %s', (_, result) => {
    expect([...writeResult(result)].join('')).toBe(`${JSON.stringify(result)}\n`);
  });

  it('never holds much more than a quarter of a megabyte', () => {
    const chunks = [...writeResult(makeResult(Array.from({ length: 5000 }, (_, index) => `node ${index}`)))];
    expect(chunks.length).toBeGreaterThan(5);
    for (const chunk of chunks) expect(chunk.length).toBeLessThan(300_000);
  });
});
