import { AxeBuilder } from '@axe-core/playwright';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launchBrowser } from '../support/browser.ts';
import { listForeign, openSignedIn, type Visit } from '../support/visits.ts';

/* An administrator writes other rules from those in force, sees whom they would touch, and publishes them. */

let browser: Browser;
let adaeze: Visit;
beforeAll(async () => {
  browser = await launchBrowser();
  adaeze = await openSignedIn(browser, 'adaeze');
});
afterAll(async () => {
  await browser?.close();
});

async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).setLegacyMode().analyze();
  expect(violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target).join(' ')}`)).toEqual(
    [],
  );
}

const duty = (page: Page) =>
  page.getByRole('group', { name: 'Does everything that interrupts faults keep its margin?' });

test('rules are drafted from those in force, refused at the field, previewed and published', async () => {
  const { page, settled } = adaeze;
  await page.goto('/settings');
  await page.getByRole('link', { name: 'Federal pro forma version 2' }).click();
  await page.getByRole('button', { name: 'Begin a draft from this version' }).click();
  await page.getByText('Draft version 3 is begun from version 2').waitFor();
  await page.getByRole('link', { name: 'Screens of the initial review' }).click();

  const limit = duty(page).getByLabel('Limit, in %');
  expect(await limit.inputValue()).toBe('87.5');
  await limit.fill('85,5');
  await page.getByRole('button', { name: 'Save draft' }).click();
  await page.getByRole('heading', { name: '1 answer needs attention' }).waitFor();
  await expectAccessible(page);
  await page.getByRole('link', { name: 'Enter the limit as a number of 0 or more' }).press('Enter');
  expect(await limit.evaluate((field) => field === document.activeElement)).toBe(true);
  // By keyboard: the field has the focus, and Enter saves.
  await page.keyboard.press('Control+A');
  await page.keyboard.type('60 %');
  await page.keyboard.press('Enter');
  await page.getByText('The draft is saved').waitFor();
  await page.getByRole('cell', { name: 'at most 60' }).waitFor();
  await expectAccessible(page);

  await page.getByRole('link', { name: 'Preview and publish' }).click();
  await page.getByText(/handed in and not bound to rules yet/).waitFor();
  await settled();
  await expectAccessible(page);
  await page.getByLabel('In force from').fill('2020-01-01');
  await page.getByRole('button', { name: 'Publish', exact: true }).click();
  await page.getByRole('button', { name: 'Publish for good' }).click();
  await page.getByRole('heading', { name: '1 answer needs attention' }).waitFor();
  await page.getByLabel('In force from').fill('2999-01-01');
  await page.getByRole('button', { name: 'Publish', exact: true }).click();
  await page.getByRole('button', { name: 'Publish for good' }).click();
  await page.getByText('Published; in force from 1 January 2999').waitFor();
  expect(await page.getByRole('navigation', { name: 'Write this draft' }).count()).toBe(0);
  expect(listForeign(adaeze)).toEqual([]);
});

test('a remembered clause of a shipped draft is confirmed, with the name of who did', async () => {
  const { page } = adaeze;
  await page.goto('/settings/rule-sets/85-percent/1');
  const open = page.getByRole('button', { name: /^Confirm clause of/ });
  await open.first().waitFor();
  const before = await open.count();
  expect(before).toBeGreaterThan(0);
  await open.first().click();
  await page.getByRole('button', { name: 'Confirm clause', exact: true }).click();
  await page.getByText('The clause is confirmed, with your name and the time').waitFor();
  expect(await open.count()).toBe(before - 1);
  await page.getByText(/From memory, confirmed by Adaeze/).waitFor();
});
