import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { parseArgs } from 'node:util';
import { proFormaRuleSet } from '../shared/rules/pro-forma.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import type { Problems } from './engine/problems.ts';
import { escapeText, listProblems } from './engine/problems.ts';
import { readRuleSet } from './engine/read-rule-set.ts';
import { decodeText } from './study-text.ts';

const usage =
  'usage: npm run --silent study -- FILE | - [--timing] [--rules FILE] [--sheet OUT.pdf | OUT.html] [--paper a4 | letter]';

/** Something that the caller has to put right; its message is for standard error. */
export class InputError extends Error {}

export type StudyArguments = {
  file: string;
  timing: boolean;
  rules: string | undefined;
  /** Where a working sheet is to be written. */
  sheet: { file: string; paper: 'a4' | 'letter' } | undefined;
};

export function readArguments(): StudyArguments {
  const { values, positionals } = parseArguments();
  const { timing, rules, sheet, paper } = values;
  if (positionals.length !== 1)
    throw new InputError(`got ${positionals.length} files, expected one\n${usage}`);
  const [file] = positionals as [string];
  if (file === '-' && rules === '-')
    throw new InputError('got - twice, expected standard input to be one file');
  if (paper !== 'a4' && paper !== 'letter')
    throw new InputError(`--paper: got ${escapeText(paper)}, expected a4 or letter\n${usage}`);
  return { file, timing, rules, sheet: sheet === undefined ? undefined : { file: sheet, paper } };
}

function parseArguments() {
  try {
    return parseArgs({
      allowPositionals: true,
      options: {
        timing: { type: 'boolean', default: false },
        rules: { type: 'string' },
        sheet: { type: 'string' },
        paper: { type: 'string', default: 'letter' },
      },
    });
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    throw new InputError(`${escapeText(error.message)}\n${usage}`);
  }
}

/** The rule set of a file, or the shipped one. */
export async function loadRuleSet(file: string | undefined): Promise<RuleSet> {
  if (file === undefined) return proFormaRuleSet;
  const decoded = decodeText(await readInput(file));
  const read = 'problems' in decoded ? decoded : readRuleSet(decoded.text);
  if (!('problems' in read)) return read.ruleSet;
  throw new InputError(
    listProblems(read.problems)
      .map((line) => `${escapeText(file)}#${line}`)
      .join('\n'),
  );
}

/** The bytes of a file, - for standard input. */
export async function readInput(file: string): Promise<Uint8Array> {
  try {
    if (file !== '-') return readFileSync(resolve(callersFolder(), file));
    const chunks: Buffer[] = [];
    for await (const chunk of process.stdin) chunks.push(chunk as Buffer);
    return Buffer.concat(chunks);
  } catch (error) {
    const got = (error as NodeJS.ErrnoException).code ?? 'an error';
    const what = file === '-' ? 'standard input' : escapeText(file);
    throw new InputError(`${what}: got ${got}, expected a readable file`);
  }
}

/** The contents' problems are for the caller to put right. */
export function orThrow<T extends object>(read: T | { problems: Problems }): T {
  if ('problems' in read) throw new InputError(listProblems(read.problems as Problems).join('\n'));
  return read as T;
}

/** npm runs scripts in the project's folder and names the caller's. */
export function callersFolder(): string {
  const isNpmScript = process.env.npm_lifecycle_event === 'study';
  return (isNpmScript && process.env.INIT_CWD) || process.cwd();
}
