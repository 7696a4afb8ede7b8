import type { Finding } from '../schemas/findings.ts';
import type { FindingPair } from '../schemas/trials.ts';

/**
 * Puts the findings of a trial beside those of the run, by question and then by element. A question that both answer once
 * only is one pair even where another element decides.
 */
export function pairFindings(ofRun: readonly Finding[], ofTrial: readonly Finding[]): FindingPair[] {
  const questionsAsked = [...new Set([...ofRun, ...ofTrial].map(({ id }) => id))];
  return questionsAsked.flatMap((id) => {
    const run = ofRun.filter((finding) => finding.id === id);
    const trial = ofTrial.filter((finding) => finding.id === id);
    if (run.length === 1 && trial.length === 1) return [{ run: run[0]!, trial: trial[0]! }];
    const elements = [...new Set([...run, ...trial].map(({ element }) => element))];
    const at = (list: readonly Finding[], element: string | undefined) =>
      list.find((finding) => finding.element === element) ?? null;
    return elements.map((element) => ({ run: at(run, element), trial: at(trial, element) }));
  });
}
