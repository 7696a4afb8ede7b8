import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { inheritEnvironment } from '../../server/config.ts';
import { addCounts, plainLine } from './counts.ts';
import { Stages } from './stages.ts';

let dir: string;
let stages: Stages;

beforeEach(() => {
  dir = mkdtempSync(join(tmpdir(), 'feederwright-stages-'));
  stages = new Stages(dir, inheritEnvironment({}));
  vi.spyOn(console, 'log').mockImplementation(() => undefined);
});

afterEach(() => {
  vi.restoreAllMocks();
  rmSync(dir, { recursive: true });
});

function program(body: string): string[] {
  const path = join(dir, 'program.mjs');
  writeFileSync(path, `import { writeFileSync } from 'node:fs';\n${body}\n`);
  return [path];
}

const leaveCounts = (passed: number, failed: number, skipped: number) =>
  `writeFileSync(process.env.FEEDERWRIGHT_COUNTS_FILE, '${JSON.stringify({ passed, failed, skipped })}');`;

describe('a counted stage', () => {
  it('gives the counts as they are, when all is green', async () => {
    const counts = await stages.counted('code', program(leaveCounts(12, 0, 1)));
    expect(counts).toEqual({ passed: 12, failed: 0, skipped: 1 });
  });

  it('gives the counts as they are, when tests failed', async () => {
    const counts = await stages.counted('code', program(`${leaveCounts(12, 2, 0)} process.exit(1);`));
    expect(counts).toEqual({ passed: 12, failed: 2, skipped: 0 });
  });

  it.each([
    ['it dies before it counted', 'process.exit(3);', 0],
    ['it is killed', `process.kill(process.pid, 'SIGKILL'); setInterval(() => {}, 1000);`, 0],
    ['it ends well but counted nothing', '', 0],
    ['it ends well and found no test', leaveCounts(0, 0, 0), 0],
    ['it counted no failure but ends badly', `${leaveCounts(12, 0, 0)} process.exit(1);`, 12],
  ])('counts one failure, when %s', async (_when, body, passed) => {
    expect(await stages.counted('code', program(body))).toEqual({ passed, failed: 1, skipped: 0 });
  });
});

describe('a check', () => {
  it('counts as one, and shows its output when it is red', async () => {
    expect(await stages.check('types', program(''))).toEqual({ passed: 1, failed: 0, skipped: 0 });
    const red = await stages.check('lint', program(`console.log('line 3: wrong'); process.exit(1);`));
    expect(red).toEqual({ passed: 0, failed: 1, skipped: 0 });
    expect(console.log).toHaveBeenCalledWith(expect.stringContaining('line 3: wrong'));
  });
});

describe('the plain line', () => {
  it('sums the stages, and speaks of skipped tests only when there are some', () => {
    const green = { passed: 1, failed: 0, skipped: 0 };
    expect(plainLine(addCounts([green, green, { passed: 40, failed: 2, skipped: 0 }]))).toBe(
      '42 passed, 2 failed',
    );
    expect(plainLine(addCounts([green, { passed: 0, failed: 0, skipped: 3 }]))).toBe(
      '1 passed, 0 failed, 3 skipped',
    );
  });
});
