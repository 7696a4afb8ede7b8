import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launchBrowser } from '../support/browser.ts';
import { makeMachineStory } from '../support/demo-projects.ts';
import { fillApplication, submitApplication, type HandedIn } from '../support/handing-in.ts';
import { openSignedIn, type Visit } from '../support/visits.ts';

let browser: Browser;
let ines: Visit;
let tobiah: Visit;
let yuki: Visit;
let project: HandedIn;
/** Who got the folder. */
let winner: string;

beforeAll(async () => {
  browser = await launchBrowser();
  // Deaf to the live stream: what they see is what was there when they opened it.
  [ines, tobiah, yuki] = await Promise.all([
    openSignedIn(browser, 'ines'),
    openSignedIn(browser, 'tobiah', { withoutLiveEvents: true }),
    openSignedIn(browser, 'yuki', { withoutLiveEvents: true }),
  ]);
  await fillApplication(ines.page, makeMachineStory('Wanted by two'));
  project = await submitApplication(ines.page);
});
afterAll(async () => {
  await browser?.close();
});

async function openFolder(page: Page, sheet: string): Promise<void> {
  await page.goto(`/desk/${project.id}?sheet=${sheet}`);
  await page.getByRole('heading', { level: 1, name: 'Wanted by two' }).waitFor();
}

const take = (page: Page) => page.getByRole('button', { name: 'Take this folder' }).click();
const has = (page: Page) => page.getByText('You have this folder.').waitFor();
const isTold = (page: Page) => page.getByRole('main').getByRole('alert').first().innerText();

test('of two reviewers who take a folder at once one has it, and the other is told by name', async () => {
  const both = [tobiah.page, yuki.page];
  await Promise.all(both.map((page) => openFolder(page, 'findings')));
  for (const page of both) await page.locator('[data-question]').first().waitFor({ state: 'attached' });
  await Promise.all(both.map(take));
  const outcomes = await Promise.all(
    both.map((page) => Promise.race([has(page).then(() => 'has it'), isTold(page)])),
  );
  expect(outcomes.filter((words) => words === 'has it')).toHaveLength(1);
  winner = outcomes[0] === 'has it' ? 'Tobiah Reyes' : 'Yuki Tanabe';
  expect(outcomes.find((words) => words !== 'has it')).toContain(`${winner} changed this application on`);
});

const reason = 'The fault duty and the grounding need a study.';

async function writeDecision(page: Page): Promise<void> {
  await openFolder(page, 'decision');
  await page.getByLabel('Require a study', { exact: true }).check();
  await page.getByLabel('Reason').fill(reason);
}

test('a decision on what a colleague has decided meanwhile is refused in words, and what was written is kept', async () => {
  const [first, second] = [tobiah.page, yuki.page];
  await openFolder(first, 'findings');
  if (winner !== 'Tobiah Reyes') {
    // What lies with a colleague is taken first.
    await first.getByRole('button', { name: 'Confirm complete' }).click();
    await first.getByRole('dialog').getByRole('button', { name: 'Confirm complete' }).click();
    await first.getByText('Yuki Tanabe has this folder; take it first').first().waitFor();
    await first.getByRole('dialog').getByRole('button', { name: 'Not yet' }).click();
    await take(first);
    await has(first);
  }
  await first.getByRole('button', { name: 'Confirm complete' }).click();
  await first.getByRole('dialog').getByRole('button', { name: 'Confirm complete' }).click();
  await first.getByRole('heading', { name: /^Findings/ }).waitFor();
  await first.locator('[data-question]').first().waitFor({ state: 'attached' });
  await Promise.all([first, second].map(writeDecision));
  // From here on nothing new reaches the second, and a page that cannot ask again keeps what it shows.
  await second.route(`**/api/applications/${project.id}`, (route) => route.abort());

  await first.getByRole('button', { name: 'Record decision' }).click();
  await first.getByText('The decision is recorded and the applicant is told').waitFor();
  await second.getByRole('button', { name: 'Record decision' }).click();
  expect(await isTold(second)).toContain('Tobiah Reyes changed this application on');
  expect(await second.getByLabel('Reason').inputValue()).toBe(reason);
});
