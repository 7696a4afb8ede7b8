import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { launchBrowser } from '../support/browser.ts';
import { openSection, startDraft } from '../support/handing-in.ts';
import { openSignedIn, type Visit } from '../support/visits.ts';

const onePixelPng = Buffer.from(
  'iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg==',
  'base64',
);
const megabyte = 1024 * 1024;
const pdfHead = Buffer.from('%PDF-1.4\n');

let browser: Browser;
let visit: Visit;
let page: Page;

beforeAll(async () => {
  browser = await launchBrowser();
  visit = await openSignedIn(browser, 'samir');
  page = visit.page;
});
afterAll(async () => {
  await browser?.close();
});
beforeEach(async () => {
  await startDraft(page);
  await openSection(page, 'Papers');
});

async function offer(...files: { name: string; buffer: Buffer }[]): Promise<void> {
  const field = page.getByLabel('Add papers');
  await field.setInputFiles(files.map((file) => ({ ...file, mimeType: 'application/pdf' })));
}

/** The words at the field, which the input also names as its description. */
async function readFieldError(): Promise<string> {
  const error = page.locator('#field-files-error');
  await error.waitFor();
  const field = page.getByLabel('Add papers');
  expect((await field.getAttribute('aria-describedby'))?.split(' ')).toContain('field-files-error');
  expect(await field.getAttribute('aria-invalid')).toBe('true');
  return error.innerText();
}

/** Neither on the page nor, once the part is saved, with the application. */
async function expectNothingAttached(): Promise<void> {
  expect(await page.getByText('No papers yet.').count()).toBe(1);
  await page.getByRole('button', { name: 'Save and go on' }).click();
  await page.getByRole('heading', { level: 1, name: 'A new application' }).waitFor();
  await openSection(page, 'Papers');
  expect(await page.locator('main a[href^="/api/files/"]').count()).toBe(0);
}

test('a PNG named .pdf is refused with its real kind, and nothing is attached', async () => {
  await offer({ name: 'site plan.pdf', buffer: onePixelPng });
  const words = await readFieldError();
  expect(words).toContain('site plan.pdf');
  expect(words).toMatch(/PNG/);
  await expectNothingAttached();
});

test('a file of 21 MB is refused with the size allowed, and nothing is attached', async () => {
  await offer({ name: 'large.pdf', buffer: Buffer.concat([pdfHead, Buffer.alloc(21 * megabyte)]) });
  const words = await readFieldError();
  expect(words).toContain('large.pdf');
  expect(words).toMatch(/20.MB/);
  await expectNothingAttached();
});

test('an empty file is refused as empty, and nothing is attached', async () => {
  await offer({ name: 'nothing.pdf', buffer: Buffer.alloc(0) });
  const words = await readFieldError();
  expect(words).toContain('nothing.pdf');
  expect(words).toMatch(/empty/);
  await expectNothingAttached();
});

test('of two files the one that is refused does not take the other with it', async () => {
  await offer({ name: 'empty.pdf', buffer: Buffer.alloc(0) }, { name: 'sheet.pdf', buffer: pdfHead });
  expect(await readFieldError()).toContain('empty.pdf');
  await page.getByRole('main').getByRole('link', { name: 'sheet.pdf' }).waitFor();
  await page.getByRole('button', { name: 'Save and go on' }).click();
  await page.getByRole('heading', { level: 1, name: 'A new application' }).waitFor();
  await openSection(page, 'Papers');
  expect(await page.locator('main a[href^="/api/files/"]').allInnerTexts()).toEqual(['sheet.pdf']);
});
