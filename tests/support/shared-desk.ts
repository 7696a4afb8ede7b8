import type { Config } from '../../server/config.ts';

export interface SharedDesk {
  url: string;
  /** The screening worker: a test may hold it with SIGSTOP, and must let it go again. */
  workerPid: number;
  config: Config;
}

/** How the browser tests are told where the one desk is that all of them use. */
export function writeSharedDesk(desk: SharedDesk): Record<string, string> {
  return { FEEDERWRIGHT_TEST_DESK: JSON.stringify(desk) };
}

export function getSharedDesk(): SharedDesk {
  const text = process.env.FEEDERWRIGHT_TEST_DESK;
  if (text === undefined) {
    throw new Error('FEEDERWRIGHT_TEST_DESK: got nothing, expected what tests/support/browser-setup.ts sets');
  }
  return JSON.parse(text) as SharedDesk;
}
