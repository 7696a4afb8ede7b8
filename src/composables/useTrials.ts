import { useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import type { TrialChange } from '../../shared/schemas/trials.ts';
import {
  deleteVariant,
  getRemedies,
  getTrialParts,
  keepVariant,
  listVariants,
  tryOut,
} from '../api/trials.ts';

/** Trials on the newest run of a folder; `mayTry` is whether this person may make them. */
export function useTrials(applicationId: Ref<string>, runId: Ref<string | undefined>, mayTry: Ref<boolean>) {
  const client = useQueryClient();
  const keptKey = computed(() => ['variants', applicationId.value]);
  const canAsk = computed(() => mayTry.value && runId.value !== undefined);
  const parts = useQuery({
    queryKey: computed(() => ['trial-parts', runId.value]),
    queryFn: () => getTrialParts(runId.value!),
    enabled: canAsk,
    staleTime: Infinity,
  });
  const remedies = useQuery({
    queryKey: computed(() => ['remedies', runId.value]),
    queryFn: () => getRemedies(runId.value!),
    enabled: canAsk,
    staleTime: Infinity,
  });
  const kept = useQuery({ queryKey: keptKey, queryFn: () => listVariants(applicationId.value) });
  const again = async <T>(act: Promise<T>) => {
    const answer = await act;
    await client.invalidateQueries({ queryKey: keptKey.value });
    return answer;
  };
  const of = (changes: TrialChange[]) => ({ runId: runId.value ?? '', changes });
  return {
    parts,
    remedies,
    kept,
    tryOut: (changes: TrialChange[]) => tryOut(applicationId.value, of(changes)),
    keep: (changes: TrialChange[], name: string) =>
      again(keepVariant(applicationId.value, { ...of(changes), name })),
    remove: async (publicId: string) => {
      await again(deleteVariant(applicationId.value, publicId));
      return true;
    },
  };
}
