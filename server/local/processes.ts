import { spawn, type ChildProcess } from 'node:child_process';
import { closeSync, existsSync, openSync, readFileSync, renameSync, statSync } from 'node:fs';
import { setTimeout as sleep } from 'node:timers/promises';

const logLimitBytes = 20_000_000;

export interface ProcessSpec {
  /** How the log and the terminal call it: "server", "MariaDB". */
  name: string;
  command: string;
  args: string[];
  env: NodeJS.ProcessEnv;
  /** Where its output goes; the terminal when undefined. */
  logFile?: string | undefined;
  /** How long it may take to end in order before it is killed. */
  stopSeconds?: number;
}

interface Exit {
  code: number | null;
  signal: NodeJS.Signals | null;
}

export interface RunningProcess {
  spec: ProcessSpec;
  pid: number;
  exited: Promise<Exit>;
  hasExited(): boolean;
  /** What it wrote last, for the person who must find out why it ended. */
  tail(lines?: number): string;
  stop(): Promise<void>;
  /** As kill -9 does: for tests of what must survive it. */
  kill(): Promise<void>;
}

/**
 * In a session of its own, so that Ctrl-C in the terminal reaches us alone and we end things in their order;
 * under setpriv, so that the system ends it when we are killed and can end nothing any more.
 */
export function startProcess(spec: ProcessSpec): RunningProcess {
  const logStart = spec.logFile === undefined ? 0 : makeRoomInLog(spec.logFile);
  const output = spec.logFile === undefined ? ('inherit' as const) : openSync(spec.logFile, 'a', 0o600);
  const child = spawn('setpriv', ['--pdeathsig', 'SIGTERM', '--', spec.command, ...spec.args], {
    detached: true,
    stdio: ['ignore', output, output],
    env: spec.env,
  });
  if (typeof output === 'number') closeSync(output);
  const exited = watchExit(child);
  const pid = child.pid;
  if (pid === undefined) throw new Error(`${spec.name} could not be started: is setpriv (util-linux) there?`);
  let ended = false;
  const done = exited.then((exit) => {
    ended = true;
    // What it started itself ends with it, in whatever way it ended.
    signalGroup(pid, 'SIGKILL');
    return exit;
  });
  return {
    spec,
    pid,
    exited: done,
    hasExited: () => ended,
    tail: (lines = 15) => (spec.logFile === undefined ? '' : readTail(spec.logFile, logStart, lines)),
    stop: async () => {
      if (!ended) child.kill('SIGTERM');
      // The timer is no reason to stay alive, once the child has ended.
      const tooLate = sleep((spec.stopSeconds ?? 15) * 1000, false, { ref: false });
      const inTime = await Promise.race([done.then(() => true), tooLate]);
      if (!inTime) signalGroup(pid, 'SIGKILL');
      await done;
    },
    kill: async () => {
      // Once it has ended, the number may be another's.
      if (!ended) signalGroup(pid, 'SIGKILL');
      await done;
    },
  };
}

function watchExit(child: ChildProcess): Promise<Exit> {
  return new Promise((resolve) => {
    child.once('exit', (code, signal) => resolve({ code, signal }));
    child.once('error', () => resolve({ code: 127, signal: null }));
  });
}

/** A group outlives its leader only while it has members: none left is what was wanted. */
function signalGroup(pid: number, signal: NodeJS.Signals): void {
  try {
    process.kill(-pid, signal);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'ESRCH') throw error;
  }
}

function makeRoomInLog(logFile: string): number {
  if (!existsSync(logFile)) return 0;
  const { size } = statSync(logFile);
  if (size < logLimitBytes) return size;
  renameSync(logFile, `${logFile}.old`);
  return 0;
}

function readTail(logFile: string, start: number, lines: number): string {
  const text = readFileSync(logFile).subarray(start).toString('utf8').trimEnd();
  return text.split('\n').slice(-lines).join('\n');
}

export function describeExit(exit: Exit): string {
  return exit.signal === null ? `exit code ${exit.code}` : `signal ${exit.signal}`;
}
