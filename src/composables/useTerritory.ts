import { useQuery } from '@tanstack/vue-query';
import { computed, ref, watch } from 'vue';
import type { AddressView, SnapView } from '../../shared/schemas/territory.ts';
import { ApiProblem } from '../api/client.ts';
import { getMapLayers, searchAddresses, snapPin } from '../api/territory.ts';

/** The base layers of the map; they change with a new installation only. */
export const useMapLayers = () =>
  useQuery({ queryKey: ['map-layers'], queryFn: getMapLayers, staleTime: Infinity, gcTime: Infinity });

/** What the pin can join, asked of the server whenever it moves; an answer that comes late is dropped. */
export function useSnap(place: () => { lat?: number; lng?: number }, phases: () => 'ABC' | 'one') {
  const snap = ref<SnapView>();
  const snapping = ref(false);
  const snapFailure = ref<string>();
  let asked = 0;

  watch(
    () => [place().lat, place().lng, phases()] as const,
    async ([lat, lng, needed]) => {
      asked += 1;
      const mine = asked;
      snap.value = undefined;
      snapFailure.value = undefined;
      if (lat === undefined || lng === undefined) return;
      snapping.value = true;
      try {
        const answer = await snapPin({ lat, lng, phases: needed });
        if (mine === asked) snap.value = answer;
      } catch (problem) {
        if (!(problem instanceof ApiProblem)) throw problem;
        if (mine === asked) snapFailure.value = problem.message;
      } finally {
        if (mine === asked) snapping.value = false;
      }
    },
    { immediate: true },
  );
  return { snap, snapping, snapFailure };
}

/** Addresses that fit what is typed, a moment after the typing stops. */
export function useAddressSearch() {
  const search = ref('');
  const asked = ref('');
  let timer: ReturnType<typeof setTimeout> | undefined;
  watch(search, (text) => {
    clearTimeout(timer);
    timer = setTimeout(() => (asked.value = text.trim()), 250);
  });
  const query = useQuery({
    queryKey: computed(() => ['addresses', asked.value]),
    queryFn: () => searchAddresses(asked.value),
    enabled: computed(() => asked.value.length >= 3),
  });
  const found = computed<AddressView[]>(() => (asked.value.length >= 3 ? (query.data.value ?? []) : []));
  const searching = computed(() => query.isFetching.value || search.value.trim() !== asked.value);
  return { search, found, searching };
}
