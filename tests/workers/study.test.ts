import { spawn } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../shared/schemas/study-result.ts';
import { readStudy } from '../../workers/engine/read-study.ts';
import { runStudy } from '../../workers/engine/run-study.ts';

const root = join(import.meta.dirname, '..', '..');
const caseFile = join(root, 'fixtures', 'cases', 'random-14', 'case.json');
const folder = mkdtempSync(join(tmpdir(), 'study-'));
afterAll(() => rmSync(folder, { recursive: true }));

type Ended = { code: number | null; stdout: string; stderr: string };

/** Runs the command as a person does, through npm, from another folder. */
function study(args: string[], input = '', cwd = folder): Promise<Ended> {
  const env = { ...process.env, npm_lifecycle_event: undefined, INIT_CWD: undefined };
  const child = spawn('npm', ['--prefix', root, 'run', '--silent', 'study', '--', ...args], { cwd, env });
  return new Promise((done, fail) => {
    const ended: Ended = { code: null, stdout: '', stderr: '' };
    child.stdout.setEncoding('utf8').on('data', (text: string) => (ended.stdout += text));
    child.stderr.setEncoding('utf8').on('data', (text: string) => (ended.stderr += text));
    child.on('error', fail).on('close', (code) => done({ ...ended, code }));
    child.stdin.on('error', () => undefined).end(input);
  });
}

describe('The study command', () => {
  it('prints the whole result of a file through a pipe and exits with 0', async () => {
    const { code, stdout, stderr } = await study([caseFile]);
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    const read = readStudy(readFileSync(caseFile, 'utf8'));
    if ('problems' in read) throw new Error('Expected a sound case.');
    expect(JSON.parse(stdout)).toEqual(JSON.parse(JSON.stringify(runStudy(read.study, proFormaRuleSet))));
  });

  it('reads standard input for -', async () => {
    const { code, stdout } = await study(['-'], readFileSync(caseFile, 'utf8'));
    expect(code).toBe(0);
    expect((JSON.parse(stdout) as StudyResult).format).toBe('feederwright.result/1');
  });

  it("takes a path relative to the caller's folder", async () => {
    writeFileSync(join(folder, 'mine.json'), readFileSync(caseFile));
    expect((await study(['mine.json'])).code).toBe(0);
  });

  it('prints one line of times with --timing', async () => {
    const { stderr } = await study([caseFile, '--timing']);
    const timing = JSON.parse(stderr) as Record<string, number>;
    expect(Object.keys(timing)).toEqual(['nodes', 'parseMs', 'checkMs', 'solveMs', 'writeMs']);
    expect(timing.nodes).toBe(52);
  });

  it('answers a bad file with exit code 2, a line for each problem, and nothing on standard output', async () => {
    const file = JSON.parse(readFileSync(caseFile, 'utf8')) as { feeder: { lines: { km: number }[] } };
    file.feeder.lines[0]!.km = -1;
    file.feeder.lines[3]!.km = 0;
    expect(await study(['-'], JSON.stringify(file))).toEqual({
      code: 2,
      stdout: '',
      stderr:
        '/feeder/lines/0/km: got -1, expected a number above 0\n/feeder/lines/3/km: got 0, expected a number above 0\n',
    });
  });

  it('stops after 200 problems and says how many more there are', async () => {
    const nodes = Array.from({ length: 301 }, () => ({}));
    const { code, stderr } = await study(
      ['-'],
      JSON.stringify({ format: 'feederwright.study/1', feeder: { nodes } }),
    );
    const lines = stderr.trimEnd().split('\n');
    expect(code).toBe(2);
    expect(lines).toHaveLength(201);
    expect(lines[200]).toBe(`and ${301 * 3 + 3 - 200} more problems`);
  });

  it.each([[['missing.json']], [[]], [['a', 'b']], [['--unknown']]])(
    'answers %j with exit code 2 and no stack',
    async (args) => {
      const { code, stdout, stderr } = await study(args);
      expect({ code, stdout }).toEqual({ code: 2, stdout: '' });
      expect(stderr).not.toContain('    at ');
    },
  );

  it('answers a study that gives no finite numbers with exit code 2 and the places, not with nulls', async () => {
    const vanishing = join(root, 'fixtures', 'invalid', 'vanishing-transformer.json');
    const { code, stdout, stderr } = await study([vanishing]);
    expect({ code, stdout }).toEqual({ code: 2, stdout: '' });
    expect(stderr).toMatch(/^\/nodes\/grid\/after\/z1\/r: got NaN, expected a finite number/);
  });

  it('is not brought down by a hundred thousand open brackets', async () => {
    const { code, stderr } = await study(['-'], '['.repeat(100_000));
    expect(code).toBe(2);
    expect(stderr).not.toContain('    at ');
  });

  it('applies another rule set with --rules, and refuses an unsound one', async () => {
    const contribution = {
      ...proFormaRuleSet.rules.contribution,
      limits: [{ limit: 99, comparison: '<=', consequence: 'study' }],
    };
    const rules = { ...proFormaRuleSet, rules: { ...proFormaRuleSet.rules, contribution } };
    writeFileSync(join(folder, 'rules.json'), JSON.stringify(rules));
    const { stdout } = await study([caseFile, '--rules', 'rules.json']);
    const finding = (JSON.parse(stdout) as StudyResult).findings.find(({ id }) => id === 'contribution');
    expect(finding).toMatchObject({ verdict: 'within', limit: 99 });

    writeFileSync(join(folder, 'rules.json'), JSON.stringify({ ...rules, rules: {} }));
    const refused = await study([caseFile, '--rules', 'rules.json']);
    expect(refused.code).toBe(2);
    expect(refused.stderr).toContain('/rules/contribution: got nothing, expected an object');
  });
});
