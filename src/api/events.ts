import type { LiveEvent } from '../../shared/schemas/events.ts';

interface EventListeners {
  opened: () => void;
  changed: (event: LiveEvent) => void;
  /** `forGood`: the browser will not try again by itself. */
  lost: (forGood: boolean) => void;
}

/** Opens the stream of changes; the answer closes it. */
export function openEvents({ opened, changed, lost }: EventListeners): () => void {
  const source = new EventSource('/api/events');
  source.addEventListener('open', opened);
  source.addEventListener('change', (message: MessageEvent<string>) =>
    changed(JSON.parse(message.data) as LiveEvent),
  );
  source.addEventListener('error', () => lost(source.readyState === EventSource.CLOSED));
  return () => source.close();
}
