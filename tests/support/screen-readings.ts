import type { Locator, Page } from 'playwright-core';

export interface ShownFinding {
  question: string;
  element: string | undefined;
  verdict: string;
  /** Null where nothing was measured. */
  value: string | null;
  limit: string | null;
}

const textOf = async (part: Locator) => ((await part.count()) === 0 ? null : await part.innerText());

/** The findings as they stand on a page, in the order of the page. */
export async function readFindings(page: Page): Promise<ShownFinding[]> {
  // What is folded away has no text to read.
  await page.evaluate(() => document.querySelectorAll('details').forEach((each) => (each.open = true)));
  const entries = await page.locator('[data-question]').all();
  return Promise.all(
    entries.map(async (entry) => ({
      question: await entry.getByRole('heading').innerText(),
      element: (await textOf(entry.locator('[data-figure="element"]'))) ?? undefined,
      verdict: await entry.locator('header .tag').innerText(),
      value: await textOf(entry.locator('[data-figure="value"]')),
      limit: await textOf(entry.locator('[data-figure="limit"]')),
    })),
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
