import { setTimeout as sleep } from 'node:timers/promises';
import { describeExit, startProcess, type ProcessSpec, type RunningProcess } from './processes.ts';

const longestDelaySeconds = 30;
/** One that ran for so long did not fail at its start: the next try comes at once again. */
const settledSeconds = 30;

export type RunOnce = (spec: ProcessSpec) => Promise<void>;

interface Kept {
  spec: ProcessSpec;
  process: RunningProcess;
  startedAt: number;
  failures: number;
}

class StoppedError extends Error {
  override name = 'StoppedError';
  constructor() {
    super('Stopped before everything was started');
  }
}

interface Listener {
  say: (line: string) => void;
  /** Called with what runs, at each change of it. */
  record: (running: { name: string; pid: number }[]) => void;
}

function failed(process: RunningProcess, why: string): Error {
  const log =
    process.spec.logFile === undefined
      ? ''
      : `\nIts last lines (${process.spec.logFile}):\n${process.tail()}`;
  return new Error(`${process.spec.name} ${why}${log}`);
}

/** Starts processes, starts them again when they die, and ends them in the reverse of the order of their start. */
export class Supervision {
  private readonly kept: Kept[] = [];
  private readonly listener: Listener;
  private readonly stopping = new AbortController();
  private stopped: Promise<void> | undefined;

  constructor(listener: Listener) {
    this.listener = listener;
  }

  /** Resolves when it is ready; throws with its last lines when it ends before, or is not ready in time. */
  async keep(spec: ProcessSpec, isReady: () => Promise<boolean>, seconds = 60): Promise<void> {
    const kept = this.start(spec);
    await this.waitUntilReady(kept.process, isReady, seconds);
    void this.restartWhenItDies(kept);
  }

  /** For what does its work and ends. */
  readonly run: RunOnce = async (spec) => {
    const kept = this.start(spec);
    const exit = await kept.process.exited;
    if (this.stopping.signal.aborted) throw new StoppedError();
    this.kept.splice(this.kept.indexOf(kept), 1);
    if (exit.code !== 0) {
      throw failed(kept.process, `ended with ${describeExit(exit)}, expected exit code 0.`);
    }
  };

  stop(): Promise<void> {
    this.stopping.abort();
    this.stopped ??= this.stopInOrder();
    return this.stopped;
  }

  private async stopInOrder(): Promise<void> {
    for (const { process } of [...this.kept].reverse()) await process.stop();
  }

  private start(spec: ProcessSpec): Kept {
    if (this.stopping.signal.aborted) throw new StoppedError();
    const kept = { spec, process: startProcess(spec), startedAt: Date.now(), failures: 0 };
    this.kept.push(kept);
    this.recordRunning();
    return kept;
  }

  private recordRunning(): void {
    const running = this.kept.filter(({ process }) => !process.hasExited());
    this.listener.record(running.map(({ spec, process }) => ({ name: spec.name, pid: process.pid })));
  }

  private async waitUntilReady(process: RunningProcess, isReady: () => Promise<boolean>, seconds: number) {
    const end = Date.now() + seconds * 1000;
    for (;;) {
      const ready = await isReady();
      if (this.stopping.signal.aborted) throw new StoppedError();
      // Asked first: what answers may be another program on the same port.
      if (process.hasExited()) {
        throw failed(process, `ended with ${describeExit(await process.exited)} before it was ready.`);
      }
      if (ready) return;
      if (Date.now() > end) throw failed(process, `was not ready within ${seconds} s.`);
      await sleep(40);
    }
  }

  private async restartWhenItDies(kept: Kept): Promise<void> {
    for (;;) {
      const exit = await kept.process.exited;
      if (this.stopping.signal.aborted) return;
      const settled = Date.now() - kept.startedAt > settledSeconds * 1000;
      kept.failures = settled ? 1 : kept.failures + 1;
      const delaySeconds = Math.min(longestDelaySeconds, 2 ** (kept.failures - 2));
      const log = kept.spec.logFile === undefined ? '' : ` Its log: ${kept.spec.logFile}`;
      this.listener.say(
        `${kept.spec.name} ended (${describeExit(exit)}); starting it again in ${delaySeconds} s.${log}`,
      );
      await sleep(delaySeconds * 1000, undefined, { signal: this.stopping.signal }).catch(() => undefined);
      if (this.stopping.signal.aborted) return;
      kept.process = startProcess(kept.spec);
      kept.startedAt = Date.now();
      this.recordRunning();
    }
  }
}
