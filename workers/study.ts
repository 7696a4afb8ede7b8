import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import { parseArgs } from 'node:util';
import { proFormaRuleSet } from '../shared/rules/pro-forma.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import { listNotFinite } from './engine/finite-result.ts';
import { readRuleSet } from './engine/read-rule-set.ts';
import { checkStudy, parseJson } from './engine/read-study.ts';
import { runStudy } from './engine/run-study.ts';
import type { Problem } from './engine/shape.ts';

/* The command line of the engine: a study file in, its result on standard output. */

const usage = 'usage: npm run --silent study -- FILE | - [--timing] [--rules FILE]';
const mostLines = 200;

/** Something that the caller has to put right; its message is for standard error. */
class InputError extends Error {}

async function main(): Promise<void> {
  const { file, timing, rules } = readArguments();
  const ruleSet = rules === undefined ? proFormaRuleSet : await loadRuleSet(rules);
  const fileText = await readInput(file);
  const marks = [performance.now()];
  const parsed = parseJson(fileText);
  if ('problems' in parsed) throw new InputError(describeProblems(parsed.problems));
  marks.push(performance.now());
  const checked = checkStudy(parsed.value);
  if ('problems' in checked) throw new InputError(describeProblems(checked.problems));
  marks.push(performance.now());
  const result = runStudy(checked.study, ruleSet);
  const notFinite = listNotFinite(result);
  if (notFinite.length > 0) throw new InputError(describeProblems(notFinite));
  marks.push(performance.now());
  await write(process.stdout, `${JSON.stringify(result)}\n`);
  marks.push(performance.now());
  if (!timing) return;
  const [parseMs, checkMs, solveMs, writeMs] = marks.slice(1).map((mark, index) => mark - marks[index]!);
  const nodes = checked.study.feeder.nodes.length;
  await write(process.stderr, `${JSON.stringify({ nodes, parseMs, checkMs, solveMs, writeMs })}\n`);
}

function readArguments(): { file: string; timing: boolean; rules: string | undefined } {
  try {
    const { values, positionals } = parseArgs({
      allowPositionals: true,
      options: { timing: { type: 'boolean', default: false }, rules: { type: 'string' } },
    });
    if (positionals.length !== 1)
      throw new InputError(`got ${positionals.length} files, expected one\n${usage}`);
    return { file: positionals[0]!, timing: values.timing, rules: values.rules };
  } catch (error) {
    if (error instanceof TypeError) throw new InputError(`${error.message}\n${usage}`);
    throw error;
  }
}

async function loadRuleSet(file: string): Promise<RuleSet> {
  const read = readRuleSet(await readInput(file));
  if ('problems' in read) throw new InputError(describeProblems(read.problems));
  return read.ruleSet;
}

async function readInput(file: string): Promise<string> {
  if (file === '-') {
    const chunks: Buffer[] = [];
    for await (const chunk of process.stdin) chunks.push(chunk as Buffer);
    return Buffer.concat(chunks).toString('utf8');
  }
  try {
    return await readFile(resolve(callersFolder(), file), 'utf8');
  } catch (error) {
    throw new InputError(
      `${file}: got ${(error as NodeJS.ErrnoException).code ?? 'an error'}, expected a readable file`,
    );
  }
}

/** npm runs scripts in the project's folder and names the caller's. */
function callersFolder(): string {
  const isNpmScript = process.env.npm_lifecycle_event === 'study';
  return (isNpmScript && process.env.INIT_CWD) || process.cwd();
}

function describeProblems(problems: readonly Problem[]): string {
  const lines = problems
    .slice(0, mostLines)
    .map(({ pointer, got, expected }) => `${pointer}: got ${got}, expected ${expected}`);
  if (problems.length > mostLines) lines.push(`and ${problems.length - mostLines} more problems`);
  return lines.join('\n');
}

/** Waits until all is handed over: an exit right after a write cuts a pipe at 64 KiB. */
function write(stream: NodeJS.WriteStream, content: string): Promise<void> {
  return new Promise((done, fail) => {
    // A reader that has seen enough, such as `head`, is no fault of the study.
    stream.once('error', (error: NodeJS.ErrnoException) => (error.code === 'EPIPE' ? done() : fail(error)));
    stream.write(content, (error) => {
      if (!error) done();
    });
  });
}

try {
  await main();
} catch (error) {
  if (!(error instanceof InputError)) throw error;
  await write(process.stderr, `${error.message}\n`);
  process.exitCode = 2;
}
