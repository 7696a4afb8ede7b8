import { useQuery } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import { layOutSheet } from '../../shared/sheet-layout.ts';
import { getSheet, sheetPdfHref } from '../api/sheets.ts';

/** The working sheet of a run, with its words; computed anew by the server, which takes a moment. */
export function useSheet(runId: Ref<string | undefined>) {
  const query = useQuery({
    queryKey: computed(() => ['sheet', runId.value]),
    queryFn: () => getSheet(runId.value!),
    enabled: computed(() => runId.value !== undefined),
    // A run is frozen, and so is its sheet.
    staleTime: Infinity,
  });
  const pages = computed(() => (query.data.value ? layOutSheet(query.data.value) : undefined));
  const papers = computed(() =>
    runId.value === undefined
      ? []
      : [
          { label: 'Save as PDF, Letter', href: sheetPdfHref(runId.value, 'letter') },
          { label: 'Save as PDF, A4', href: sheetPdfHref(runId.value, 'a4') },
        ],
  );
  return { ...query, pages, papers };
}
