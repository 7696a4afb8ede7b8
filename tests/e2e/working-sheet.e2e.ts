import { readFileSync } from 'node:fs';
import { AxeBuilder } from '@axe-core/playwright';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Worklist } from '../../shared/schemas/applications.ts';
import { launchBrowser } from '../support/browser.ts';
import { readPdfText } from '../support/pdf-text.ts';
import { openSignedIn } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

/** Line ends and spaces are set by moving on; what no font of the paper has is spelt out. */
const squeeze = (text: string) => text.replace(/√/g, 'sqrt').replace(/[\s\u00a0]+/g, '');

/** Contrast is looked at in one section only: a sheet has thousands of places, all of the same few kinds. */
async function listAxeFaults(page: Page): Promise<string[]> {
  const tags = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
  const whole = new AxeBuilder({ page }).withTags(tags).disableRules(['color-contrast']);
  const part = new AxeBuilder({ page })
    .include('section[aria-labelledby="path"]')
    .withRules(['color-contrast']);
  const found = [await whole.setLegacyMode().analyze(), await part.setLegacyMode().analyze()];
  return found.flatMap(({ violations }) => violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html}`));
}

test('a reviewer follows a finding to its working, and saves the sheet with the same numbers as a document', async () => {
  const visit = await openSignedIn(browser, 'tobiah');
  const { page, context, settled, errors } = visit;
  const answer = await context.request.get('/api/applications?page=1&pageSize=1&stage=initial-review');
  const [row] = ((await answer.json()) as Worklist).rows;
  await page.goto(`/desk/${row!.publicId}`);
  await settled();
  const link = page.getByRole('link', { name: /^Show the working/ }).first();
  const [, id] = (await link.getAttribute('href'))!.split('#') as [string, string];
  await link.click();
  await page.getByRole('heading', { level: 2, name: 'Per-unit basis' }).waitFor();
  await settled();
  const heading = page.locator(`h3[id="${decodeURIComponent(id)}"]`);
  await heading.waitFor();
  expect(await heading.evaluate((element) => element === document.activeElement)).toBe(true);

  await page.getByRole('button', { name: 'Unfold all details' }).click();
  const results = await page.locator('.steps td:last-child').allInnerTexts();
  expect(results).not.toContain('');
  expect(results.length).toBeGreaterThan(30);
  expect(await listAxeFaults(page)).toEqual([]);
  await page.setViewportSize({ width: 360, height: 740 });
  expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(360);

  const waiting = page.waitForEvent('download');
  await page.getByRole('link', { name: 'Save as PDF, Letter' }).click();
  const download = await waiting;
  expect(download.suggestedFilename()).toMatch(/^working-sheet-.*\.pdf$/);
  const printed = squeeze(readPdfText(readFileSync(await download.path())));
  expect(printed).toContain(squeeze(row!.reference));
  expect(results.map(squeeze).filter((result) => !printed.includes(result))).toEqual([]);
  expect(errors).toEqual([]);
  await context.close();
});
