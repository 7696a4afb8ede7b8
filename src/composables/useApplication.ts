import { useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, ref, watch, type Ref } from 'vue';
import type { ApplicationView } from '../../shared/schemas/applications.ts';
import { getApplication } from '../api/applications.ts';
import { useLiveEvents, usePollingInterval } from './useLiveEvents.ts';

/**
 * One application, fetched again when something is told about it. While nothing can be told: every second as long as
 * its run is under way, and now and then otherwise.
 */
export function useApplication(id: Ref<string>) {
  useLiveEvents();
  const client = useQueryClient();
  const queryKey = computed(() => ['application', id.value]);
  const isUnderWay = ref(false);
  const soon = usePollingInterval(() => isUnderWay.value);
  const later = usePollingInterval(() => true, 10_000);
  const query = useQuery({
    queryKey,
    queryFn: () => getApplication(id.value),
    refetchInterval: computed(() => soon.value || later.value),
  });
  watch(
    () => query.data.value?.run?.state,
    (state) => (isUnderWay.value = state === 'queued' || state === 'running'),
    { immediate: true },
  );
  /** Shows the answer of an act at once, and lets lists fetch theirs. */
  function take(application: ApplicationView) {
    client.setQueryData(queryKey.value, application);
    void client.invalidateQueries({ queryKey: ['applications'] });
  }
  return { ...query, take };
}
