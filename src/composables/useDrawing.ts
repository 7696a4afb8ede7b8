import { useQuery } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import { getModelDrawing } from '../api/models.ts';

/** The drawing of one network model (staff only). */
export function useDrawing(code: Ref<string | undefined>) {
  const drawing = useQuery({
    queryKey: computed(() => ['model-drawing', code.value]),
    queryFn: () => getModelDrawing(code.value ?? ''),
    enabled: computed(() => code.value !== undefined),
    staleTime: 300_000,
  });
  return { drawing };
}
