import { AxeBuilder } from '@axe-core/playwright';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Worklist } from '../../shared/schemas/applications.ts';
import { launchBrowser } from '../support/browser.ts';
import { openSignedIn } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

test('a reviewer tries half the size beside the run, keeps the trial under a name, and deletes it again', async () => {
  const visit = await openSignedIn(browser, 'tobiah');
  const { page, context, settled, errors } = visit;
  const answer = await context.request.get('/api/applications?page=1&pageSize=1&stage=initial-review');
  const [row] = ((await answer.json()) as Worklist).rows;
  await page.goto(`/desk/${row!.publicId}?sheet=trials`);
  await settled();

  await page.getByLabel(/^Size times/).fill('0.5');
  await page.getByRole('button', { name: 'Add this change' }).click();
  await page.getByText('Size of the project times 0.50').first().waitFor();
  await page.getByRole('button', { name: 'Try these changes' }).click();
  const trial = page.locator('[data-trial]');
  await trial.getByRole('table').waitFor();
  expect(await trial.locator('.caution').innerText()).toContain('A trial');
  expect(await trial.locator('tbody tr').count()).toBeGreaterThan(5);
  await page.getByRole('heading', { name: 'What would bring it within' }).waitFor();
  await settled();

  const axe = new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa']);
  const { violations } = await axe.setLegacyMode().analyze();
  expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html}`)).toEqual([]);

  // Nothing is kept without a name, and the page says so at the field.
  await trial.getByRole('button', { name: 'Keep this trial' }).click();
  await trial.getByRole('alert').first().waitFor();
  await trial.getByLabel('Name to keep it under').fill('Half the size');
  await trial.getByRole('button', { name: 'Keep this trial' }).click();
  const kept = page.locator('[data-kept]');
  await kept.waitFor();
  expect(await kept.locator('summary').innerText()).toContain('Trial “Half the size”, kept by');

  await kept.locator('summary').click();
  await kept.getByRole('button', { name: 'Delete this trial' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Delete trial' }).click();
  await page.getByText('No trial is kept').waitFor();
  expect(errors.filter((error) => !/400/.test(error))).toEqual([]);
  await context.close();
});
