import { readonly, ref } from 'vue';

interface Outcome {
  tone?: 'done' | 'notice' | 'wrong';
  title: string;
  text?: string;
}

const shown = ref<Outcome>();
const waiting = ref<Outcome>();

/** The router calls it at every change of page: what waited is shown, what was shown is gone. */
export function turnOutcome(): void {
  shown.value = waiting.value;
  waiting.value = undefined;
}

/** The outcome of the last action, shown above the page's heading until the next page. */
export function useOutcome() {
  return {
    outcome: readonly(shown),
    tellHere: (outcome: Outcome) => (shown.value = outcome),
    tell: (outcome: Outcome) => (waiting.value = outcome),
  };
}
