import { createLog } from '../../server/log.ts';
import type { LiveEvent } from '../../shared/schemas/events.ts';
import type { Database } from '../../db/connection.ts';
import { computeStudy } from '../../workers/compute-study.ts';
import type { ScreenDeps } from '../../workers/jobs/screen-deps.ts';

interface FixtureScreening extends ScreenDeps {
  published: LiveEvent[];
  /** How often something was computed. */
  computed: () => number;
}

/** The real engine without a process of its own; `changes` put something else in the place of a part. */
export function makeScreening(db: Database, changes: Partial<ScreenDeps> = {}): FixtureScreening {
  const published: LiveEvent[] = [];
  let computed = 0;
  return {
    db,
    log: createLog('silent', 'test'),
    events: { publish: async (event) => void published.push(event), subscribe: () => () => undefined },
    compute: {
      async study(bytes, ruleSet, onStep) {
        computed += 1;
        return computeStudy(bytes, ruleSet, onStep);
      },
    },
    now: () => new Date(),
    leaseSeconds: 60,
    retryDelaysSeconds: [0, 0, 0, 0],
    published,
    computed: () => computed,
    ...changes,
  };
}
