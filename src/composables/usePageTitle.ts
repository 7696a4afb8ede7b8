import {
  computed,
  onScopeDispose,
  ref,
  shallowReactive,
  toValue,
  watchEffect,
  type MaybeRefOrGetter,
} from 'vue';

const title = ref('');
const formsWithErrors = shallowReactive(new Set<symbol>());
const fullTitle = computed(() => {
  const page = title.value === '' ? 'Feederwright' : `${title.value} – Feederwright`;
  return formsWithErrors.size > 0 ? `Error: ${page}` : page;
});
watchEffect(() => {
  if (typeof document !== 'undefined') document.title = fullTitle.value;
});

/** Names the page in the window's title, as long as the view lives and as often as the words change. */
export function usePageTitle(given: MaybeRefOrGetter<string>): void {
  watchEffect(() => (title.value = toValue(given)));
}

/** Puts "Error: " in front of the title while `hasErrors` says so. */
export function useErrorTitle(hasErrors: () => boolean): void {
  const form = Symbol('form');
  watchEffect(() => {
    if (hasErrors()) formsWithErrors.add(form);
    else formsWithErrors.delete(form);
  });
  onScopeDispose(() => formsWithErrors.delete(form));
}
