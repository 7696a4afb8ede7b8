import { findSetting } from '../../db/repositories/settings.ts';
import {
  answersWithIds,
  makeDemoApplications,
  type DemoApplication,
} from '../../db/seeds/demo/applications.ts';
import type { Deps } from '../../server/context.ts';
import { computeStudy } from '../compute-study.ts';
import type { ScreenDeps } from '../jobs/screen-deps.ts';
import { screenRun } from '../jobs/screen.ts';
import { playEvent, type Play } from './play-event.ts';

const dayMilliseconds = 86_400_000;
const hourMilliseconds = 3_600_000;
const minuteMilliseconds = 60_000;

interface Moment {
  application: DemoApplication;
  /** Place in the application's own events. */
  index: number;
  at: Date;
}

/** The same day at a working hour (08:00 to 16:00 in the demo's zone), in the same order; today stays as it is. */
function atWorkingHour(at: Date, now: Date): Date {
  const day = Math.floor(at.getTime() / dayMilliseconds) * dayMilliseconds;
  if (now.getTime() - day < dayMilliseconds) return at;
  return new Date(day + 13 * hourMilliseconds + (at.getTime() - day) / 3);
}

/** The scenario as one list in the order of time. */
function listMoments(applications: readonly DemoApplication[], now: Date): Moment[] {
  return applications
    .flatMap((application) =>
      application.events.map(({ daysAgo }, index) => ({
        application,
        index,
        at: atWorkingHour(new Date(now.getTime() - daysAgo * dayMilliseconds), now),
      })),
    )
    .sort((a, b) => a.at.getTime() - b.at.getTime() || a.index - b.index);
}

/**
 * Walks the demo's applications through the product's own services, with the clock set back to when each thing
 * happened, and screens every run with the real engine: the demo shows no state that the product could not reach.
 */
export async function plantApplications(base: Pick<Deps, 'db' | 'config' | 'log'>, now: Date): Promise<void> {
  const applications = makeDemoApplications();
  const moments = listMoments(applications, now);
  const codes = (await findSetting(base.db, 'demo.equipment-codes')) as Record<string, string>;
  const waiting: number[] = [];
  const events = { publish: () => Promise.resolve(), subscribe: () => () => undefined };
  const queue = {
    enqueue: (runId: number) => Promise.resolve(void waiting.push(runId)),
    enqueueRoom: () => Promise.resolve(),
  };
  const compute: ScreenDeps['compute'] & Deps['compute'] = {
    ask: () => Promise.reject(new Error('Nobody tries anything while the demo is planted')),
    study: (bytes, ruleSet, onStep) => Promise.resolve(computeStudy(bytes, ruleSet, onStep)),
  };
  async function screenWaiting(at: Date): Promise<void> {
    const soon = new Date(Math.min(now.getTime(), at.getTime() + minuteMilliseconds));
    const deps = { ...base, events, compute, now: () => soon, leaseSeconds: 3600, retryDelaysSeconds: [] };
    for (let runId = waiting.shift(); runId !== undefined; runId = waiting.shift())
      await screenRun(deps, runId);
  }
  const play: Play = {
    deps: { ...base, queue, events, compute },
    publicIds: new Map(),
    publicIdOf: (code) => codes[code] ?? code,
    screenWaiting,
  };

  for (const { application, index, at } of moments) {
    const event = application.events[index];
    if (event === undefined) continue;
    const answers = answersWithIds(application.answers, play.publicIdOf);
    await playEvent(play, { application, answers, event, at });
    await screenWaiting(at);
  }
}
