import { keepPreviousData, useQuery } from '@tanstack/vue-query';
import { computed } from 'vue';
import { useRoute, useRouter } from 'vue-router';
import { stages, type Stage } from '../../shared/rules/application-life.ts';
import { worklistSorts, type WorklistSort } from '../../shared/schemas/applications.ts';
import { stageWords } from '../../shared/wording.ts';
import { listApplications } from '../api/applications.ts';
import { useLiveEvents, usePollingInterval } from './useLiveEvents.ts';

export interface WorklistFilters {
  stage?: Stage;
  assigned?: 'mine' | 'unassigned';
  outside?: boolean;
  search?: string;
}

const one = (value: unknown) => (typeof value === 'string' && value !== '' ? value : undefined);
const known = <T extends string>(value: string | undefined, list: readonly T[]) =>
  list.find((candidate) => candidate === value);

/** The worklist as the address says it: filters, order and page live in the query, so that it can be shared. */
export function useWorklist() {
  const route = useRoute();
  const router = useRouter();
  useLiveEvents();

  const filters = computed<WorklistFilters>(() => ({
    stage: known(one(route.query.stage), stages),
    assigned: known(one(route.query.assigned), ['mine', 'unassigned'] as const),
    outside: route.query.outside === 'true' || undefined,
    search: one(route.query.search),
  }));
  const sort = computed<{ key: WorklistSort; direction: 'asc' | 'desc' }>(() => ({
    key: known(one(route.query.sort), worklistSorts) ?? 'due',
    direction: route.query.direction === 'desc' ? 'desc' : 'asc',
  }));
  const page = computed(() => Math.max(1, Number(route.query.page) || 1));

  const asked = computed(() => ({
    page: String(page.value),
    sort: sort.value.key,
    direction: sort.value.direction,
    stage: filters.value.stage,
    assigned: filters.value.assigned,
    outside: filters.value.outside ? 'true' : undefined,
    search: filters.value.search,
  }));
  const query = useQuery({
    queryKey: computed(() => ['applications', asked.value]),
    queryFn: () => listApplications(asked.value),
    placeholderData: keepPreviousData,
    refetchInterval: usePollingInterval(() => true, 10_000),
  });

  function address(change: Record<string, string | undefined>) {
    const merged = { ...route.query, ...change };
    return {
      name: 'desk',
      query: Object.fromEntries(Object.entries(merged).filter(([, value]) => one(value))),
    };
  }
  const apply = (next: WorklistFilters) =>
    router.push(
      address({
        stage: next.stage,
        assigned: next.assigned,
        outside: next.outside ? 'true' : undefined,
        search: next.search?.trim(),
        page: undefined,
      }),
    );
  const chips = computed(() =>
    [
      { key: 'stage', label: filters.value.stage && `Stage: ${stageWords[filters.value.stage].label}` },
      {
        key: 'assigned',
        label: filters.value.assigned && (filters.value.assigned === 'mine' ? 'Mine' : 'Unassigned'),
      },
      { key: 'outside', label: filters.value.outside && 'With a finding outside its limit' },
      { key: 'search', label: filters.value.search && `“${filters.value.search}”` },
    ].flatMap(({ key, label }) =>
      label ? [{ key, label, without: address({ [key]: undefined, page: undefined }) }] : [],
    ),
  );

  return { filters, sort, page, query, address, apply, chips };
}
