import type { Database } from '../../db/connection.ts';
import type { Compute } from '../../server/compute.ts';
import type { Deps } from '../../server/context.ts';

/** What a screening is handed; `now` is the clock, which the making of a demo sets back. */
export interface ScreenDeps extends Pick<Deps, 'events' | 'log'> {
  db: Database;
  compute: Pick<Compute, 'study'>;
  now(): Date;
  leaseSeconds: number;
  /** Before the second, third, … attempt. */
  retryDelaysSeconds: readonly number[];
}

export const mostAttempts = 5;

/** What everyone reads of a run that was tried often enough; the causes are staff's to see. */
export const parkedWords = `The screening could not be completed in ${mostAttempts} attempts. An administrator sees why; nothing that was handed in is lost.`;
