import { AxeBuilder } from '@axe-core/playwright';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { NetworkModelView } from '../../shared/schemas/territory.ts';
import { launchBrowser } from '../support/browser.ts';
import { openSignedIn } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

test('a reviewer has the room of a model worked out, and reads it on the map and in the table', async () => {
  const { page, context, settled, errors } = await openSignedIn(browser, 'tobiah');
  const models = (await (await context.request.get('/api/models')).json()) as NetworkModelView[];
  const [smallest] = [...models].sort((p, q) => p.nodeCount - q.nodeCount);
  await page.goto(`/models?model=${smallest!.code}`);
  await page.getByRole('link', { name: /^See how much more could connect/ }).click();
  await page.getByRole('heading', { level: 1, name: `Room, ${smallest!.code}` }).waitFor();
  await page.getByRole('button', { name: 'Work the room out' }).click();
  await page.getByRole('table').waitFor({ timeout: 60_000 });
  await settled();
  expect(await page.locator('tbody tr').count()).toBeGreaterThan(5);
  expect(await page.locator('.map-sheet .map-room').count()).toBeGreaterThan(5);
  expect(await page.locator('main').innerText()).toContain('One project at a time; not additive');

  const axe = new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa']);
  const { violations } = await axe.setLegacyMode().analyze();
  expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html}`)).toEqual([]);

  await page.getByLabel('Synchronous machine').check();
  await page.getByRole('application', { name: /for synchronous machine$/ }).waitFor();
  expect(errors).toEqual([]);
  await context.close();
});
