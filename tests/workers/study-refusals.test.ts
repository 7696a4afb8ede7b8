import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { Ended } from './study-command.ts';
import { caseFile, runInShell, runStudyCommand } from './study-command.ts';

const folder = mkdtempSync(join(tmpdir(), 'refused-'));
afterAll(() => rmSync(folder, { recursive: true }));

const study = (args: string[], input: string | Uint8Array = '') =>
  runStudyCommand(args, { input, cwd: folder });

function expectRefusal({ code, stdout, stderr }: Ended): string[] {
  expect({ code, stdout }).toEqual({ code: 2, stdout: '' });
  expect(stderr).not.toMatch(/^ {4}at /m);
  expect(stderr.endsWith('\n')).toBe(true);
  return stderr.slice(0, -1).split('\n');
}

const sound = readFileSync(caseFile, 'utf8');

describe('The study command and a file that cannot be run', () => {
  it('prints a line for each problem', async () => {
    const file = JSON.parse(sound) as { feeder: { lines: { km: number }[] } };
    file.feeder.lines[0]!.km = -1;
    file.feeder.lines[3]!.km = 0;
    expect(expectRefusal(await study(['-'], JSON.stringify(file)))).toEqual([
      '/feeder/lines/0/km: got -1, expected a number above 0',
      '/feeder/lines/3/km: got 0, expected a number above 0',
    ]);
  });

  it.each([
    [201, 'and 406 more problems'],
    [1_000_000, 'and 2999803 more problems'],
  ])(
    'stops after 200 of the problems of %i empty nodes and says how many more there are',
    async (count, last) => {
      const nodes = Array.from({ length: count }, () => ({}));
      const file = JSON.stringify({ format: 'feederwright.study/1', feeder: { nodes } });
      const lines = expectRefusal(await study(['-'], file));
      expect(lines).toHaveLength(201);
      expect(lines[200]).toBe(last);
    },
  );

  it.each([
    ['nothing', ''],
    ['blanks', ' \n\t'],
    ['half a file', sound.slice(0, sound.length / 2)],
    ['two files', sound + sound],
    ['a hundred thousand open brackets', '['.repeat(100_000)],
    ['as many, closed', '['.repeat(100_000) + ']'.repeat(100_000)],
    ['as many objects', '{"a":'.repeat(100_000) + '1' + '}'.repeat(100_000)],
    ['a number that is none', sound.replace(/"km": ?[\d.]+/, '"km":NaN')],
    ['a key twice and wrong at last', sound.replace('"baseMva"', '"baseMva":1,"baseMva":-1,"baseMvar"')],
    ['a number with a million digits', `{"baseMva":${'9'.repeat(1_000_000)}}`],
    ['an id of a million letters at nothing', sound.replace(/"from": ?"/, `$&${'x'.repeat(1_000_000)}`)],
    [
      'bytes of another encoding',
      Buffer.concat([Buffer.from('{"name":"'), Buffer.of(0xe9), Buffer.from('"}')]),
    ],
    ['two bytes for each letter', Buffer.from(`\uFEFF${sound}`, 'utf16le')],
    ['a program', readFileSync(process.execPath).subarray(0, 100_000)],
  ])('refuses %s', async (_, input) => {
    const lines = expectRefusal(await study(['-'], input));
    expect(lines.length).toBeLessThanOrEqual(201);
    for (const line of lines) expect(line).toMatch(/^\/[^:]{0,300}: got .{1,200}, expected .{1,1000}$/);
  });

  it('says when a text is not in UTF-8', async () => {
    const lines = expectRefusal(await study(['-'], Buffer.of(0x7b, 0xff, 0x7d)));
    expect(lines).toEqual(['/: got bytes that are no text in UTF-8, expected a file in UTF-8']);
  });
});

describe('The study command and what it is asked', () => {
  it.each([
    [['missing.json'], 'missing.json: got ENOENT, expected a readable file'],
    [['.'], '.: got EISDIR, expected a readable file'],
    [[`${caseFile}/inner`], `${caseFile}/inner: got ENOTDIR, expected a readable file`],
    [['a\nb'], 'a\\nb: got ENOENT, expected a readable file'],
    [['x'.repeat(5000)], `${'x'.repeat(5000)}: got ENAMETOOLONG, expected a readable file`],
    [[caseFile, '--rules', 'missing.json'], 'missing.json: got ENOENT, expected a readable file'],
    [['-', '--rules', '-'], 'got - twice, expected standard input to be one file'],
  ])('answers %j with one line', async (args, line) => {
    expect(expectRefusal(await study(args))).toEqual([line]);
  });

  it.each([[[]], [['a', 'b']], [['--unknown']], [[caseFile, '--rules']], [['--timing=yes', caseFile]]])(
    'answers %j with how to ask',
    async (args) => {
      expect(expectRefusal(await study(args)).at(-1)).toMatch(/^usage: npm run --silent study -- /);
    },
  );

  it.each(['<&-', '< /dev/null', '< .'])('answers standard input without contents: %s', async (from) => {
    const ended = await runInShell(`"$@" ${from}`, ['-'], { cwd: folder });
    expect(expectRefusal(ended)).toEqual(['/: got Unexpected end of JSON input, expected a file in JSON']);
  });
});

describe('The study command and an unsound rule set', () => {
  const refuse = async (rules: string) => {
    writeFileSync(join(folder, 'rules.json'), rules);
    return expectRefusal(await study([caseFile, '--rules', 'rules.json']));
  };

  it('names the rule that belongs to no question', async () => {
    const { contribution } = proFormaRuleSet.rules;
    const [line] = await refuse(JSON.stringify({ ...proFormaRuleSet, rules: { horoscope: contribution } }));
    expect(line).toMatch(/^rules\.json#\/rules\/horoscope: got an object, expected no such field \(known: /);
  });

  it.each([
    ['', 'rules.json#/: got Unexpected end of JSON input, expected a file in JSON'],
    ['[]', 'rules.json#/: got a list of 0, expected an object'],
    [
      JSON.stringify({ ...proFormaRuleSet, code: 7 }),
      'rules.json#/code: got 7, expected a text that is not empty',
    ],
    [sound, 'rules.json#/format: got "feederwright.study/1", expected "feederwright.rule-set/1"'],
  ])('names the place in the file', async (rules, line) => {
    expect(await refuse(rules)).toContain(line);
  });
});
