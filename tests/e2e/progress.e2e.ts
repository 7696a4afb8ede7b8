import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { ApplicationView } from '../../shared/schemas/applications.ts';
import { launchBrowser } from '../support/browser.ts';
import { makeMachineStory } from '../support/demo-projects.ts';
import { fillApplication, submitApplication } from '../support/handing-in.ts';
import { holdWorker, letWorkerGo, letWorkerStep } from '../support/held-worker.ts';
import { isSameDocument, keepProgress, markDocument } from '../support/screen-readings.ts';
import { openSignedIn, type Visit } from '../support/visits.ts';

/* A run takes half a second: the worker is held again and again, so that each page can show where it stands. */

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

async function readPercent({ context }: Visit, id: string): Promise<number> {
  const answer = await context.request.get(`/api/applications/${id}`);
  return ((await answer.json()) as ApplicationView).run?.percent ?? 0;
}

/** Not so when the worker was held after it wrote the value and before it told of it. */
function isShown(page: Page, percent: number): Promise<boolean> {
  const bar = page.locator(`progress[value="${percent}"]`);
  return bar.waitFor({ timeout: 1500 }).then(
    () => true,
    () => false,
  );
}

/** Hands in a machine, follows its run on its page, and gives each value that the page showed, up to its findings. */
async function followRun(visit: Visit, name: string): Promise<number[]> {
  const { page } = visit;
  await fillApplication(page, makeMachineStory(name));
  holdWorker();
  try {
    const { id } = await submitApplication(page);
    await page.goto(`/projects/${id}`);
    await page.getByRole('region', { name: 'Progress of the screening run' }).waitFor();
    await markDocument(page);
    const readProgress = await keepProgress(page);
    let shown = await readPercent(visit, id);
    for (let stations = 0; stations < 4 && shown < 100;) {
      await letWorkerStep();
      const percent = await readPercent(visit, id);
      if (percent !== shown && (await isShown(page, percent))) stations += 1;
      shown = percent;
    }
    letWorkerGo();
    await page.locator('[data-question]').first().waitFor({ state: 'attached' });
    expect(await isSameDocument(page)).toBe(true);
    return await readProgress();
  } finally {
    letWorkerGo();
  }
}

/** What lies between the beginning and the end of a run, and rises. */
function listStations(seen: readonly number[]): number[] {
  expect(seen).toEqual([...seen].sort((a, b) => a - b));
  return [...new Set(seen)].filter((percent) => percent > 0 && percent < 100);
}

test('the progress of a run reaches the page by server-sent events, value by value', async () => {
  const visit = await openSignedIn(browser, 'ines');
  expect(listStations(await followRun(visit, 'Told by events')).length).toBeGreaterThanOrEqual(3);
  expect(visit.requests.filter((address) => address.endsWith('/api/events')).length).toBeGreaterThan(0);
  expect(visit.errors).toEqual([]);
  await visit.context.close();
});

test('with the live stream cut, the page asks again by itself and the values arrive all the same', async () => {
  const visit = await openSignedIn(browser, 'ines', { withoutLiveEvents: true });
  expect(listStations(await followRun(visit, 'Asked again and again')).length).toBeGreaterThanOrEqual(3);
  expect(visit.errors.filter((words) => !words.includes('/api/events'))).toEqual([]);
  await visit.context.close();
});
