import { computed, ref } from 'vue';
import type { FieldProblem } from '../../shared/schemas/problems.ts';
import { ApiProblem } from '../api/client.ts';
import { useErrorTitle } from './usePageTitle.ts';

const idOf = (path: string) => `field-${path.replaceAll('.', '-')}`;

/**
 * Errors of one form as the server told them. `prefix` is cut from the front of each path, so that fields are named
 * as the form knows them; an error whose field is not on the page still stands in the summary.
 */
export function useForm({ prefix = '' }: { prefix?: string } = {}) {
  const errors = ref<FieldProblem[]>([]);
  const title = ref<string>();
  const attempt = ref(0);
  const busy = ref(false);

  const hasErrors = computed(() => errors.value.length > 0 || title.value !== undefined);
  useErrorTitle(() => hasErrors.value);

  const errorAt = (path: string) => errors.value.find((error) => error.path === path)?.message;
  const field = (path: string) => ({ id: idOf(path), error: errorAt(path) });
  const summary = computed(() =>
    errors.value.map(({ path, message }) => ({ id: path === '' ? null : idOf(path), message })),
  );

  function clear() {
    errors.value = [];
    title.value = undefined;
  }

  /** Shows `problems` at their fields; `heading` replaces the counted heading of the summary. */
  function fail(problems: readonly FieldProblem[], heading?: string) {
    errors.value = problems.map(({ path, message }) => ({
      path: path.startsWith(prefix) ? path.slice(prefix.length) : path,
      message,
    }));
    title.value = heading;
    attempt.value += 1;
  }

  /** Runs `action` once at a time; undefined when it was refused, with the reasons shown. */
  async function submit<T>(action: () => Promise<T>): Promise<T | undefined> {
    if (busy.value) return undefined;
    busy.value = true;
    try {
      const answer = await action();
      clear();
      return answer;
    } catch (problem) {
      if (!(problem instanceof ApiProblem)) throw problem;
      fail(problem.errors, problem.errors.length > 0 ? undefined : problem.message);
      return undefined;
    } finally {
      busy.value = false;
    }
  }

  return { errors, title, attempt, busy, hasErrors, summary, field, errorAt, submit, fail, clear };
}
