import { useQueryClient } from '@tanstack/vue-query';
import type { Ref } from 'vue';
import type { ApplicationView, Decision, Deficiency } from '../../shared/schemas/applications.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import {
  askForMissing,
  changeReviewer,
  confirmCompleteness,
  decideApplication,
  recordMove,
} from '../api/applications.ts';
import { agreeToWaiver, screenAgain, takeBackWaiver, waiveFinding } from '../api/runs.ts';

/** What a reviewer may do with one folder; every act carries the version that was on the screen. */
export function useReview(
  application: Ref<ApplicationView | undefined>,
  take: (answer: ApplicationView) => void,
) {
  const client = useQueryClient();

  function shown(): ApplicationView {
    if (!application.value) throw new Error('The folder is not loaded yet');
    return application.value;
  }
  const act = async (action: (id: string, version: number) => Promise<ApplicationView>) => {
    const { publicId, version } = shown();
    const answer = await action(publicId, version);
    take(answer);
    return answer;
  };
  const again = async <T>(action: Promise<T>) => {
    const answer = await action;
    await client.invalidateQueries({ queryKey: ['application', shown().publicId] });
    return answer;
  };

  return {
    takeOn: () => act((id, version) => changeReviewer(id, { version, reviewer: 'me' })),
    putBack: () => act((id, version) => changeReviewer(id, { version, reviewer: null })),
    confirmComplete: () => act((id, version) => confirmCompleteness(id, { version })),
    ask: (items: Deficiency['items']) => act((id, version) => askForMissing(id, { version, items })),
    decide: (decision: Omit<Decision, 'version'>) =>
      act((id, version) => decideApplication(id, { ...decision, version })),
    move: (event: string, note: string) => act((id, version) => recordMove(id, { version, event, note })),
    screenAgain: () => again(screenAgain(shown().publicId)),
    waive: (runId: string, finding: Finding, reason: string) =>
      again(waiveFinding(runId, { question: finding.id, element: finding.element, reason })),
    agree: (runId: string, finding: Finding, reason: string) =>
      again(agreeToWaiver(runId, { question: finding.id, element: finding.element, reason })),
    takeBackWaiver: (runId: string, finding: Finding) =>
      again(takeBackWaiver(runId, finding.id, finding.element ?? '')),
  };
}

export type Review = ReturnType<typeof useReview>;
