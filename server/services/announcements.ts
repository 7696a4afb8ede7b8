import type { LiveEvent } from '../../shared/schemas/events.ts';
import type { Deps } from '../context.ts';

/** A run that was asked for in a transaction and goes to the queue once that is committed. */
export interface RequestedRun {
  id: number;
  publicId: string;
  applicationPublicId: string;
}

interface Changes {
  applications?: { publicId: string; version: number }[];
  /** New ones: they go to the queue. */
  runs?: RequestedRun[];
  /** Known ones of which something changed. */
  runVersions?: { publicId: string; applicationPublicId: string; version: number }[];
}

function listEvents({ applications = [], runs = [], runVersions = [] }: Changes): LiveEvent[] {
  const ofRuns = [...runs.map((run) => ({ ...run, version: 1 })), ...runVersions];
  return [
    ...applications.map(({ publicId: id, version }) => ({
      kind: 'application' as const,
      id,
      applicationId: id,
      version,
    })),
    ...ofRuns.map(({ publicId: id, applicationPublicId: applicationId, version }) => ({
      kind: 'run' as const,
      id,
      applicationId,
      version,
    })),
  ];
}

async function attempt(deps: Deps, what: string, work: () => Promise<void>): Promise<void> {
  try {
    await work();
  } catch (error) {
    // What was asked is committed: the sweep finds a run that never reached the queue, pages ask again by themselves.
    deps.log.warn({ err: error }, `${what} did not get through`);
  }
}

/** After the commit: puts runs into the queue and tells open pages what moved. Never fails the request. */
export async function announce(deps: Deps, changes: Changes): Promise<void> {
  await Promise.all([
    ...(changes.runs ?? []).map(({ id }) =>
      attempt(deps, `Run row ${id} to the queue`, () => deps.queue.enqueue(id, 0)),
    ),
    ...listEvents(changes).map((event) =>
      attempt(deps, `Event of ${event.kind} ${event.id}`, () => deps.events.publish(event)),
    ),
  ]);
}
