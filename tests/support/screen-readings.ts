import type { Page } from 'playwright-core';

export interface ShownFinding {
  question: string;
  element: string | undefined;
  verdict: string;
  /** Null where nothing was measured. */
  value: string | null;
  limit: string | null;
}

/**
 * The findings as they stand on a page, in its order, also those that are folded away. All at one moment: a page that hears
 * of a newer run writes them anew.
 */
export function readFindings(page: Page): Promise<ShownFinding[]> {
  return page.evaluate(() =>
    [...document.querySelectorAll('[data-question]')].map((entry) => {
      const textOf = (selector: string) => entry.querySelector(selector)?.textContent.trim() ?? null;
      return {
        question: textOf('h3') ?? '',
        element: textOf('[data-figure="element"]') ?? undefined,
        verdict: textOf('header .tag') ?? '',
        value: textOf('[data-figure="value"]'),
        limit: textOf('[data-figure="limit"]'),
      };
    }),
  );
}

/** Marks the document: the mark is gone once the page has been loaded again. */
export async function markDocument(page: Page): Promise<void> {
  await page.evaluate(() => document.documentElement.setAttribute('data-test-mark', 'same document'));
}

export async function isSameDocument(page: Page): Promise<boolean> {
  return (await page.locator('html[data-test-mark]').count()) === 1;
}

/** From now on, keeps each value that the page's progress bar shows. */
export async function keepProgress(page: Page): Promise<() => Promise<number[]>> {
  await page.evaluate(() => {
    const seen: number[] = [];
    const look = () => {
      const bar = document.querySelector('progress');
      if (bar?.hasAttribute('value') && seen.at(-1) !== bar.value) seen.push(bar.value);
      document.documentElement.setAttribute('data-test-progress', JSON.stringify(seen));
    };
    // The attribute it writes is outside of what it watches.
    new MutationObserver(look).observe(document.body, {
      subtree: true,
      childList: true,
      attributes: true,
      attributeFilter: ['value'],
    });
    look();
  });
  return async () => {
    const kept = await page.locator('html').getAttribute('data-test-progress');
    return JSON.parse(kept ?? '[]') as number[];
  };
}
