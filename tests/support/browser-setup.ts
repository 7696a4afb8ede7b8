import { startDesk } from './processes.ts';
import { setup as setupServices } from './global-setup.ts';
import { writeSharedDesk } from './shared-desk.ts';

/** One desk with its demo for all browser tests: planting the demo takes longer than most of them. */
export async function setup(): Promise<(() => Promise<void>) | undefined> {
  if (process.env.FEEDERWRIGHT_TEST_DESK !== undefined) return undefined;
  const stopServices = await setupServices();
  try {
    const desk = await startDesk({ pages: true });
    const workerPid = desk.worker.pid;
    if (workerPid === undefined) throw new Error('The worker: got no process, expected one that runs');
    Object.assign(process.env, writeSharedDesk({ url: desk.url, workerPid, config: desk.config }));
    return async () => {
      await desk.end();
      await stopServices?.();
    };
  } catch (error) {
    await stopServices?.();
    throw error;
  }
}
