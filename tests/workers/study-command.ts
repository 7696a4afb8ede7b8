import { spawn } from 'node:child_process';
import { join } from 'node:path';

/* Runs the engine's command line. */

export const root = join(import.meta.dirname, '..', '..');
export const program = join(root, 'workers', 'study.mjs');
export const caseFile = join(root, 'fixtures', 'cases', 'random-14', 'case.json');

export type Ended = { code: number | null; stdout: string; stderr: string };

type Surroundings = { input?: string | Uint8Array; cwd: string };

/** Runs a command to its end, away from the variables that npm gave this process. */
export function run(
  command: string,
  args: readonly string[],
  { input = '', cwd }: Surroundings,
): Promise<Ended> {
  const env = { ...process.env, npm_lifecycle_event: undefined, INIT_CWD: undefined };
  const child = spawn(command, args, { cwd, env });
  return new Promise((done, fail) => {
    const ended: Ended = { code: null, stdout: '', stderr: '' };
    child.stdout.setEncoding('utf8').on('data', (text: string) => (ended.stdout += text));
    child.stderr.setEncoding('utf8').on('data', (text: string) => (ended.stderr += text));
    child.on('error', fail).on('close', (code) => done({ ...ended, code }));
    child.stdin.on('error', () => undefined).end(input); // one that reads nothing closes it early
  });
}

/** As a person runs it, through npm. */
export function runThroughNpm(args: readonly string[], surroundings: Surroundings): Promise<Ended> {
  return run('npm', ['--prefix', root, 'run', '--silent', 'study', '--', ...args], surroundings);
}

export function runStudyCommand(args: readonly string[], surroundings: Surroundings): Promise<Ended> {
  return run(process.execPath, [program, ...args], surroundings);
}

/** As part of a line of shell, in which `"$@"` stands for the command; it fails when any part of a pipe does. */
export function runInShell(
  line: string,
  args: readonly string[],
  surroundings: Surroundings,
): Promise<Ended> {
  return run(
    'bash',
    ['-o', 'pipefail', '-c', line, 'bash', process.execPath, program, ...args],
    surroundings,
  );
}
