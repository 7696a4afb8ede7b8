import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { describeExit, startProcess, type RunningProcess } from '../../server/local/processes.ts';
import type { Counts } from './counts.ts';

const vitest = 'node_modules/vitest/vitest.mjs';
const longestStageSeconds = 480;

function listArguments(project: string): string[] {
  const reporters = ['--reporter=default', '--reporter=./tests/support/plain-line-reporter.ts'];
  return [vitest, 'run', '--project', project, ...reporters];
}

/** The stages of one test run; `stop` ends those that are under way. */
export class Stages {
  private readonly running = new Set<RunningProcess>();
  private readonly directory: string;
  private readonly env: NodeJS.ProcessEnv;

  constructor(directory: string, env: NodeJS.ProcessEnv) {
    this.directory = directory;
    this.env = env;
  }

  async stop(): Promise<void> {
    await Promise.all([...this.running].map((process) => process.stop()));
  }

  /** One check that is green or red as a whole; its output is shown when it is red. */
  async check(name: string, args: string[]): Promise<Counts> {
    const logFile = join(this.directory, `${name}.log`);
    const exit = await this.runToEnd(name, args, this.env, logFile);
    console.log(exit.ok ? `✓ ${name} (${exit.seconds} s)` : `✗ ${name}: ${exit.text}`);
    if (!exit.ok) console.log(readFileSync(logFile, 'utf8'));
    return { passed: exit.ok ? 1 : 0, failed: exit.ok ? 0 : 1, skipped: 0 };
  }

  project(name: string): Promise<Counts> {
    console.log(`\n${name} tests`);
    return this.counted(name, listArguments(name));
  }

  /** Runs beside another stage: what it says is shown in one piece when it has ended. */
  async projectBeside(name: string): Promise<Counts> {
    const logFile = join(this.directory, `${name}.log`);
    const counts = await this.counted(name, listArguments(name), logFile);
    console.log(`\n${name} tests`);
    if (existsSync(logFile)) console.log(readFileSync(logFile, 'utf8'));
    return counts;
  }

  /**
   * A program that leaves its counts in FEEDERWRIGHT_COUNTS_FILE. Whatever way it ends without counts that are
   * green, at least one failure is reported.
   */
  async counted(name: string, args: string[], logFile?: string): Promise<Counts> {
    const countsFile = join(this.directory, `${name}.json`);
    const env = { ...this.env, FEEDERWRIGHT_COUNTS_FILE: countsFile };
    const exit = await this.runToEnd(name, args, env, logFile);
    const counts = existsSync(countsFile)
      ? (JSON.parse(readFileSync(countsFile, 'utf8')) as Counts)
      : { passed: 0, failed: 0, skipped: 0 };
    if (counts.failed > 0 || (exit.ok && counts.passed > 0)) return counts;
    console.log(
      `✗ ${name} tests: ${exit.text}, ${counts.passed} passed and none failed: counted as a failure.`,
    );
    return { ...counts, failed: 1 };
  }

  private async runToEnd(name: string, args: string[], env: NodeJS.ProcessEnv, logFile?: string) {
    const startedAt = Date.now();
    const child = startProcess({ name, command: process.execPath, args, env, logFile, stopSeconds: 5 });
    this.running.add(child);
    const limit = new AbortController();
    const late = sleep(longestStageSeconds * 1000, undefined, { signal: limit.signal }).then(
      () => child.kill(),
      () => undefined, // it ended in time
    );
    const exit = await child.exited;
    limit.abort();
    await late;
    this.running.delete(child);
    const seconds = Math.round((Date.now() - startedAt) / 100) / 10;
    return { ok: exit.code === 0, seconds, text: `ended with ${describeExit(exit)} after ${seconds} s` };
  }
}
