import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Worklist } from '../../shared/schemas/applications.ts';
import { launchBrowser } from '../support/browser.ts';
import { readPdfText } from '../support/pdf-text.ts';
import { readFindings } from '../support/screen-readings.ts';
import { openSignedIn } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

/** Line ends, and spaces that Chromium sets by moving on instead, are not what is looked for. */
const squeeze = (text: string) => text.replace(/\s+/g, '');

test('a folder printed on paper says in words what the screen says, without what is only for pressing', async () => {
  const { page, context, settled } = await openSignedIn(browser, 'tobiah');
  const answer = await context.request.get('/api/applications?page=1&pageSize=1&stage=initial-review');
  const [row] = ((await answer.json()) as Worklist).rows;
  await page.goto(`/desk/${row!.publicId}`);
  await settled();
  const findings = await readFindings(page);
  expect(findings.filter(({ value }) => value !== null).length).toBeGreaterThan(2);

  const printed = squeeze(readPdfText(await page.pdf({ format: 'Letter' })));
  for (const words of [row!.reference, row!.name, 'Page1of']) expect(printed).toContain(squeeze(words));
  for (const { question, verdict, value, limit } of findings) {
    for (const words of [question, verdict, value ?? '', limit ?? '']) {
      expect(printed).toContain(squeeze(words));
    }
  }
  for (const words of ['Sign out', 'Take this folder', 'Download the study file', 'Skip to']) {
    expect(printed).not.toContain(squeeze(words));
  }
  await context.close();
});
