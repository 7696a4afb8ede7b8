import type { Logger } from 'pino';

interface Repeated {
  /** No further round begins; the one under way is waited for. */
  stop(): Promise<void>;
}

/** Does `work` now and again `seconds` after it ended; one that fails is logged and tried again next time. */
export function repeat(name: string, seconds: number, log: Logger, work: () => Promise<unknown>): Repeated {
  let timer: NodeJS.Timeout | undefined;
  let stopped = false;
  async function round(): Promise<void> {
    try {
      await work();
    } catch (error) {
      log.error({ err: error }, name);
    }
    if (!stopped) timer = setTimeout(begin, seconds * 1000);
  }
  let underWay: Promise<void>;
  function begin(): void {
    underWay = round();
  }
  begin();
  return {
    async stop() {
      stopped = true;
      clearTimeout(timer);
      await underWay;
    },
  };
}
