import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launchBrowser } from '../support/browser.ts';
import { openSection, startDraft } from '../support/handing-in.ts';
import { openSignedIn, openVisit } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

const focused = (page: Page) => page.locator(':focus');

async function tabTo(page: Page, isThere: (page: Page) => Promise<boolean>): Promise<void> {
  for (let presses = 0; presses < 60; presses += 1) {
    await page.keyboard.press('Tab');
    if (await isThere(page)) return;
  }
  throw new Error('Tab: got nowhere in 60 presses, expected to come to what is looked for');
}

test('the first Tab of a page is the way past its head, and it leads to the content', async () => {
  const { page, context, settled } = await openVisit(browser);
  await page.goto('/sign-in');
  await settled();
  await page.keyboard.press('Tab');
  expect(await focused(page).innerText()).toBe('Skip to the page’s content');
  expect(await focused(page).boundingBox()).toMatchObject({ y: expect.closeTo(16, 0) as number });
  await page.keyboard.press('Enter');
  expect(await focused(page).getAttribute('id')).toBe('main');
  await context.close();
});

test('a new page has the focus on its heading, and its own title', async () => {
  const { page, context, settled } = await openSignedIn(browser, 'pell');
  await settled();
  await page.getByRole('link', { name: 'Network models' }).focus();
  await page.keyboard.press('Enter');
  await page.getByRole('heading', { level: 1, name: 'Network models' }).waitFor();
  expect(await focused(page).innerText()).toBe('Network models');
  expect(await page.title()).toBe('Network models – Feederwright');
  await context.close();
});

test('with the keyboard alone the map is moved and the pin put down where its cross-hair is', async () => {
  const { page, context, settled } = await openSignedIn(browser, 'samir');
  await startDraft(page);
  await openSection(page, 'Site');
  await settled();
  await tabTo(page, async () => (await focused(page).getAttribute('role')) === 'application');
  const place = page.getByLabel('Latitude, longitude');
  await page.keyboard.press('Enter');
  await page.locator('.map-pin').waitFor();
  const [, firstLng] = (await place.inputValue()).split(',').map(Number);
  for (let presses = 0; presses < 3; presses += 1) await page.keyboard.press('ArrowRight');
  await page.waitForTimeout(400);
  await page.keyboard.press('Enter');
  await settled();
  const [lat, lng] = (await place.inputValue()).split(',').map(Number);
  expect(lng).toBeGreaterThan(firstLng!);
  const box = await page.locator('.map-pin').boundingBox();
  const map = await page.getByRole('application').boundingBox();
  expect(box!.x + box!.width / 2).toBeCloseTo(map!.x + map!.width / 2, -1);
  const answer = page.getByRole('region', { name: 'What is there' });
  expect(await answer.innerText()).toMatch(/Distance from the pin|Nothing that can take/);

  await page.getByRole('button', { name: 'Save and go on' }).focus();
  await page.keyboard.press('Enter');
  await page.getByRole('heading', { level: 1, name: 'Equipment' }).waitFor();
  await page.goBack();
  await page.getByRole('heading', { level: 1, name: 'Site' }).waitFor();
  expect(await place.inputValue()).toBe(`${lat!.toFixed(6)}, ${lng!.toFixed(6)}`);
  await context.close();
});
