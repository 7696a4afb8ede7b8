import { renewTurn, type RunTurn } from '../../db/repositories/run-turns.ts';
import type { RunStep } from '../../shared/schemas/runs.ts';
import type { ScreenDeps } from './screen-deps.ts';

/** The turn went to another worker, or to nobody: whatever was computed is thrown away. */
export class TurnLost extends Error {
  override name = 'TurnLost';
  constructor(turn: RunTurn) {
    super(`Run ${turn.publicId}: attempt ${turn.attempt} lost its turn`);
  }
}

export async function publishRun(deps: ScreenDeps, turn: RunTurn, version: number): Promise<void> {
  const { publicId, applicationPublicId } = turn;
  await deps.events.publish({ kind: 'run', id: publicId, applicationId: applicationPublicId, version });
}

export interface Progress {
  /** All that were noted, in order. */
  readonly steps: RunStep[];
  /** Of the run's row, as far as it is written. */
  readonly version: number;
  step(key: string, label: string, percent: number): void;
  /** Everything is written and nothing more will be; throws TurnLost where it was not ours to write. */
  settle(): Promise<void>;
  /** Holds the turn no longer. */
  stop(): void;
}

/** Writes each step of a run as it is reached, one after the other, and holds the turn between them. */
export function followProgress(deps: ScreenDeps, turn: RunTurn): Progress {
  const steps: RunStep[] = [];
  let { version } = turn;
  let lost = false;
  let lastWrite: Promise<void> = Promise.resolve();
  let fault: unknown;

  async function write(shown: RunStep[]): Promise<void> {
    if (lost || fault !== undefined) return;
    const leaseUntil = new Date(deps.now().getTime() + deps.leaseSeconds * 1000);
    lost = !(await renewTurn(deps.db, turn, leaseUntil, shown));
    if (lost) return;
    version += 1;
    await publishRun(deps, turn, version);
  }

  function enqueue(): void {
    const shown = [...steps];
    lastWrite = lastWrite
      .then(() => write(shown))
      .catch((error: unknown) => {
        fault ??= error;
      });
  }

  const holding = setInterval(enqueue, (deps.leaseSeconds * 1000) / 3);
  return {
    steps,
    get version() {
      return version;
    },
    step(key, label, percent) {
      steps.push({ key, label, percent, at: deps.now().toISOString() });
      enqueue();
    },
    async settle() {
      clearInterval(holding);
      await lastWrite;
      if (lost) throw new TurnLost(turn);
      if (fault !== undefined) throw fault;
    },
    stop: () => clearInterval(holding),
  };
}
