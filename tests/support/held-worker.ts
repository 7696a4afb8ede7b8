import { setTimeout as sleep } from 'node:timers/promises';
import { getSharedDesk } from './shared-desk.ts';

/** The screening worker stops where it is, as on a machine that has no time for it. */
export function holdWorker(): void {
  process.kill(getSharedDesk().workerPid, 'SIGSTOP');
}

export function letWorkerGo(): void {
  process.kill(getSharedDesk().workerPid, 'SIGCONT');
}

/** A moment of time for a held worker: about one step of a run. */
export async function letWorkerStep(): Promise<void> {
  letWorkerGo();
  await sleep(4);
  holdWorker();
}
