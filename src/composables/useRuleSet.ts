import { useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import type { RuleSetEdit, RuleSetPublication } from '../../shared/schemas/rule-set-edits.ts';
import type { RuleSetView } from '../../shared/schemas/rule-set-views.ts';
import {
  confirmRule,
  deleteDraft,
  getRuleSet,
  publishDraft,
  saveDraft,
  startDraft,
} from '../api/rule-sets.ts';

/** One version of a rule set, and what may be done with it; each act carries the version that was on the screen. */
export function useRuleSet(code: Ref<string>, number: Ref<number>) {
  const client = useQueryClient();
  const queryKey = computed(() => ['rule-set', code.value, number.value]);
  const query = useQuery({ queryKey, queryFn: () => getRuleSet(code.value, number.value) });

  /** Shows what an act answered, under its own number, and lets the list fetch its own. */
  async function take(action: Promise<RuleSetView>): Promise<RuleSetView> {
    const answer = await action;
    client.setQueryData(['rule-set', answer.code, answer.number], answer);
    void client.invalidateQueries({ queryKey: ['rule-sets'] });
    return answer;
  }
  const seen = () => query.data.value?.version ?? 1;

  return {
    ...query,
    begin: () => take(startDraft(code.value, number.value)),
    save: (edit: Omit<RuleSetEdit, 'version'>) =>
      take(saveDraft(code.value, number.value, { ...edit, version: seen() })),
    publish: (body: Omit<RuleSetPublication, 'version'>) =>
      take(publishDraft(code.value, number.value, { ...body, version: seen() })),
    confirm: (question: string) => take(confirmRule(code.value, number.value, question)),
    async throwAway() {
      const left = await deleteDraft(code.value, number.value, seen());
      client.setQueryData(['rule-sets'], left);
      return left;
    },
  };
}
