import { useQueryClient, type QueryClient } from '@tanstack/vue-query';
import { computed, onScopeDispose, readonly, ref } from 'vue';
import type { LiveEvent } from '../../shared/schemas/events.ts';
import { openEvents } from '../api/events.ts';

type Handler = (event: LiveEvent) => void;

const firstWaitMs = 1000;
const longestWaitMs = 30_000;

// One stream a tab: browsers allow few connections to one host, and every page would otherwise open its own.
const connected = ref(false);
const handlers = new Set<Handler>();
let listeners = 0;
let close: (() => void) | undefined;
let retryTimer: ReturnType<typeof setTimeout> | undefined;
let waitMs = firstWaitMs;
let wasLost = false;

/** Keys that are being fetched, and whether something was told about them meanwhile. */
const fetching = new Map<string, { again: boolean }>();

/** A fetch under way is let come to its end: cut off by each change, a quick row of them would show its last only. */
function fetchAgain(queryClient: QueryClient, queryKey: string[]) {
  const name = JSON.stringify(queryKey);
  const underWay = fetching.get(name);
  if (underWay) {
    underWay.again = true;
    return;
  }
  const mine = { again: false };
  fetching.set(name, mine);
  void queryClient.invalidateQueries({ queryKey }).finally(() => {
    fetching.delete(name);
    if (mine.again) fetchAgain(queryClient, queryKey);
  });
}

function refresh(queryClient: QueryClient, event: LiveEvent) {
  const touched = [['application', event.applicationId], ['applications'], ['runs', event.applicationId]];
  if (event.kind === 'run') touched.push(['run', event.id]);
  for (const queryKey of touched) fetchAgain(queryClient, queryKey);
}

function open(queryClient: QueryClient) {
  close = openEvents({
    opened: () => {
      connected.value = true;
      waitMs = firstWaitMs;
      // What happened while the stream was cut is not told again.
      if (wasLost) void queryClient.invalidateQueries();
      wasLost = false;
    },
    changed: (event) => {
      refresh(queryClient, event);
      for (const handler of handlers) handler(event);
    },
    lost: (forGood) => {
      connected.value = false;
      wasLost = true;
      if (!forGood) return;
      close?.();
      retryTimer = setTimeout(() => open(queryClient), waitMs);
      waitMs = Math.min(waitMs * 2, longestWaitMs);
    },
  });
}

function stop() {
  clearTimeout(retryTimer);
  close?.();
  close = undefined;
  connected.value = false;
  wasLost = false;
}

/**
 * Hears what changes while the component lives. Queries of the application and run concerned are fetched again
 * anyway; `handler` is for what goes beyond that.
 */
export function useLiveEvents(handler?: Handler) {
  const queryClient = useQueryClient();
  if (handler) handlers.add(handler);
  listeners += 1;
  if (listeners === 1) open(queryClient);
  onScopeDispose(() => {
    if (handler) handlers.delete(handler);
    listeners -= 1;
    if (listeners === 0) stop();
  });
  return { connected: readonly(connected) };
}

/** For `refetchInterval`: asks again every `everyMs` only while changes are not told by themselves. */
export function usePollingInterval(active: () => boolean = () => true, everyMs = 1000) {
  return computed<number | false>(() => (connected.value || !active() ? false : everyMs));
}
