import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../shared/schemas/study-result.ts';
import { computeStudy } from '../../workers/compute-study.ts';
import { readStudy } from '../../workers/engine/read-study.ts';
import { runStudy } from '../../workers/engine/run-study.ts';
import { caseFile, runInShell, runStudyCommand, runThroughNpm } from './study-command.ts';

const folder = mkdtempSync(join(tmpdir(), 'study-'));
afterAll(() => rmSync(folder, { recursive: true }));

const study = (args: string[], input: string | Uint8Array = '') =>
  runStudyCommand(args, { input, cwd: folder });
const shell = (line: string, args: string[]) => runInShell(line, args, { cwd: folder });

/** A chain of a thousand nodes: its result is a megabyte, many times what a pipe holds. */
const longFile = join(folder, 'long.json');
writeFileSync(longFile, JSON.stringify(makeChain(1000)));

function makeChain(count: number) {
  const names = Array.from({ length: count }, (_, index) => `mast-${index}-ß`);
  const z1 = { r: 0.2, x: 0.4 };
  const lines = names.slice(1).map((to, index) => {
    return { id: `l${index}`, from: names[index], to, phases: 'ABC', km: 0.1, z1, z0: { r: 0.5, x: 1.2 } };
  });
  return {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1.05, min: 0.95 },
    feeder: {
      nodes: names.map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
      sources: [{ id: 's', node: names[0], max: { z1 } }],
      lines,
    },
  };
}

describe('The study command', () => {
  it('prints the whole result of a file through npm and a pipe, and exits with 0', async () => {
    const { code, stdout, stderr } = await runThroughNpm([caseFile], { cwd: folder });
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    const read = readStudy(readFileSync(caseFile, 'utf8'));
    if ('problems' in read) throw new Error('Expected a sound case.');
    expect(stdout).toBe(`${JSON.stringify(runStudy(read.study, proFormaRuleSet))}\n`);
  });

  it("takes a path relative to the caller's folder when npm starts it", async () => {
    writeFileSync(join(folder, 'mine.json'), readFileSync(caseFile));
    expect((await runThroughNpm(['mine.json'], { cwd: folder })).code).toBe(0);
  });

  it('prints exactly the bytes that a worker stores', async () => {
    const answer = computeStudy(readFileSync(longFile), proFormaRuleSet);
    if (answer.kind !== 'computed') throw new Error('Expected a result.');
    const { stdout } = await study([longFile]);
    expect(Buffer.from(stdout).equals(answer.resultBytes)).toBe(true);
    expect(stdout.length).toBeGreaterThan(500_000);
  });

  it('reads standard input for -', async () => {
    const { code, stdout } = await study(['-'], readFileSync(caseFile));
    expect(code).toBe(0);
    expect((JSON.parse(stdout) as StudyResult).format).toBe('feederwright.result/1');
  });

  it('prints one line of times with --timing', async () => {
    const { stderr } = await study([caseFile, '--timing']);
    const timing = JSON.parse(stderr) as Record<string, number>;
    expect(Object.keys(timing)).toEqual(['nodes', 'parseMs', 'checkMs', 'solveMs', 'writeMs']);
    expect(timing.nodes).toBe(52);
    for (const value of Object.values(timing)) expect(value).toBeGreaterThan(0);
  });

  it('waits for a slow reader, and all arrives', async () => {
    const { stdout } = await study([longFile]);
    const slow = await shell('"$@" | (sleep 0.5; cat)', [longFile]);
    expect(slow).toEqual({ code: 0, stdout, stderr: '' });
  });

  it('ends quietly when its reader has seen enough', async () => {
    expect(await shell('"$@" | head -c 10', [longFile])).toEqual({
      code: 0,
      stdout: '{"format":',
      stderr: '',
    });
  });

  it('does its work with any of its three streams closed', async () => {
    expect((await shell('"$@" <&-', [caseFile])).code).toBe(0);
    expect(await shell('"$@" >&-', [caseFile])).toEqual({ code: 0, stdout: '', stderr: '' });
    expect((await shell('"$@" 2>&-', ['missing.json'])).code).toBe(2);
  });

  it('says that what it writes to is full, with exit code 1', async () => {
    const { code, stderr } = await shell('"$@" > /dev/full', [caseFile]);
    expect(code).toBe(1);
    expect(stderr).toMatch(/^No result: .*ENOSPC.*\n$/);
  });

  it('applies another rule set with --rules', async () => {
    const contribution = {
      ...proFormaRuleSet.rules.contribution,
      limits: [{ limit: 99, comparison: '<=', consequence: 'study' }],
    };
    const rules = { ...proFormaRuleSet, rules: { ...proFormaRuleSet.rules, contribution } };
    const { stdout } = await study([caseFile, '--rules', '-'], JSON.stringify(rules));
    const finding = (JSON.parse(stdout) as StudyResult).findings.find(({ id }) => id === 'contribution');
    expect(finding).toMatchObject({ verdict: 'within', limit: 99 });
  });
});
