import { useQuery, useQueryClient } from '@tanstack/vue-query';
import type { StuckWorkView } from '../../shared/schemas/stuck-work.ts';
import { getStuckWork, retryMail, retryRun } from '../api/stuck-work.ts';
import { useForm } from './useForm.ts';
import { useOutcome } from './useOutcome.ts';

const queryKey = ['stuck-work'];

/** What stopped, asked again now and then; trying again shows at once what is left. */
export function useStuckWork() {
  const queryClient = useQueryClient();
  const { tellHere } = useOutcome();
  const form = useForm();
  const query = useQuery({ queryKey, queryFn: getStuckWork, refetchInterval: 10_000 });

  async function retry(action: () => Promise<StuckWorkView>, title: string) {
    const left = await form.submit(action);
    if (left === undefined) return void query.refetch();
    queryClient.setQueryData(queryKey, left);
    tellHere({ title });
  }

  return {
    query,
    form,
    tryRun: (id: string, reference: string) =>
      retry(() => retryRun(id), `The screening of ${reference} waits for its turn again`),
    tryMail: (key: string, recipient: string) =>
      retry(() => retryMail(key), `The mail to ${recipient} is sent again`),
  };
}
