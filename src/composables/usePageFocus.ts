import { nextTick } from 'vue';

const longestWaitMs = 8000;
let watching: MutationObserver | undefined;
let giveUp: ReturnType<typeof setTimeout> | undefined;

function focusHeading(main: Element, before: Element | null): boolean {
  const now = document.activeElement;
  // Something on the new page already took the focus (an error summary): leave it there.
  if (now !== before && now !== document.body && main.contains(now)) return true;
  const heading = main.querySelector<HTMLElement>('h1');
  heading?.focus({ preventScroll: true });
  return heading !== null;
}

/**
 * After a change of page: focus on the new h1, which also makes a screen reader say it. A view whose heading comes
 * with its data is waited for.
 */
export async function movePageFocus(): Promise<void> {
  const before = document.activeElement;
  watching?.disconnect();
  clearTimeout(giveUp);
  await nextTick();
  const main = document.querySelector('main');
  if (!main || focusHeading(main, before)) return;
  watching = new MutationObserver(() => {
    if (focusHeading(main, before)) watching?.disconnect();
  });
  watching.observe(main, { childList: true, subtree: true });
  giveUp = setTimeout(() => watching?.disconnect(), longestWaitMs);
}
