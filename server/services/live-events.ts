import type { LiveEvent } from '../../shared/schemas/events.ts';
import { access } from '../access.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { isWithinReach } from './ownership.ts';

interface Listener {
  hear(event: LiveEvent): void;
  /** Events may have passed unheard. */
  onGap(): void;
}

/** Passes on, in their order, the events about applications that this person may see. Gives the way to end it. */
export function followEvents(deps: Deps, { actor }: SignedInContext, listener: Listener): () => void {
  const reach = access['application.read'].roles[actor.role];
  const known = new Map<string, boolean>();
  let last: Promise<void> = Promise.resolve();

  async function mayHear({ applicationId }: LiveEvent): Promise<boolean> {
    const answer = known.get(applicationId);
    if (answer !== undefined) return answer;
    const within = await isWithinReach(deps, actor, reach, 'application', applicationId);
    // Another organisation's stays so; a draft that staff may not see is handed in one day.
    if (within || reach === 'own') known.set(applicationId, within);
    return within;
  }

  async function passOn(event: LiveEvent): Promise<void> {
    try {
      if (await mayHear(event)) listener.hear(event);
    } catch (error) {
      deps.log.warn({ err: error }, 'An event was not passed on');
    }
  }

  return deps.events.subscribe(
    (event) => {
      last = last.then(() => passOn(event));
    },
    () => listener.onGap(),
  );
}
