import { useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import type { AnswerSection } from '../../shared/schemas/answers.ts';
import { getDraft, saveDraftSection } from '../api/drafts.ts';

/** The draft of one application, and the saving of one of its parts. */
export function useDraft(id: Ref<string>) {
  const client = useQueryClient();
  const queryKey = computed(() => ['draft', id.value]);
  const query = useQuery({ queryKey, queryFn: () => getDraft(id.value) });

  async function save(section: AnswerSection, answers: unknown) {
    const version = query.data.value?.version;
    if (version === undefined) throw new Error('The draft is not loaded yet');
    const draft = await saveDraftSection(id.value, section, { version, answers });
    client.setQueryData(queryKey.value, draft);
    void client.invalidateQueries({ queryKey: ['applications'] });
    return draft;
  }

  return { ...query, save };
}
