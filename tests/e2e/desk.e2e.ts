import { execFile } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { releaseFindings } from '../../server/services/released-findings.ts';
import { describeFinding } from '../../shared/finding-words.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import type { StudyResult } from '../../shared/schemas/study-result.ts';
import { launchBrowser } from '../support/browser.ts';
import { makeMachineStory, makeSolarStory } from '../support/demo-projects.ts';
import { fillApplication, submitApplication, type HandedIn } from '../support/handing-in.ts';
import { holdWorker, letWorkerGo } from '../support/held-worker.ts';
import { isSameDocument, markDocument, readFindings } from '../support/screen-readings.ts';
import { listForeign, openSignedIn, type Visit } from '../support/visits.ts';

/* One story, told in order: each test goes on where the one before it ended. */

const directory = mkdtempSync(join(tmpdir(), 'feederwright-e2e-'));
let browser: Browser;
let ines: Visit;
let tobiah: Visit;
let solar: HandedIn;
let machine: HandedIn;

beforeAll(async () => {
  browser = await launchBrowser();
  [ines, tobiah] = await Promise.all([openSignedIn(browser, 'ines'), openSignedIn(browser, 'tobiah')]);
});
afterAll(async () => {
  await browser?.close();
  rmSync(directory, { recursive: true, force: true });
});

const lineDiagram = Buffer.from(
  '%PDF-1.4\n1 0 obj<</Type/Catalog/Pages 2 0 R>>endobj\n2 0 obj<</Type/Pages/Kids[]/Count 0>>endobj\ntrailer<</Root 1 0 R>>\n%%EOF\n',
);

async function findByAddress(page: Page): Promise<void> {
  await page.getByLabel('Or an address').fill('28 Ridding Road');
  await page.getByRole('button', { name: '28 Ridding Road, Ridding' }).click();
  await page.locator('[data-snap="found"]').waitFor();
}

const openFolder = (page: Page, { id }: HandedIn, sheet: string) => page.goto(`/desk/${id}?sheet=${sheet}`);
const findings = (page: Page) => page.locator('[data-question]');

test('an applicant submits a solar project and a machine on two feeders', async () => {
  const { page } = ines;
  await fillApplication(page, makeSolarStory('Larkhill meadow'));
  solar = await submitApplication(page);
  const story = makeMachineStory('Ridding mill');
  const paper = { name: 'one-line diagram.pdf', content: lineDiagram };
  await fillApplication(page, { ...story, putPin: findByAddress, paper });

  // Held, so that both pages are open before there is anything to find.
  holdWorker();
  try {
    machine = await submitApplication(page);
    await page.getByRole('link', { name: 'See the project and its findings' }).click();
    await tobiah.page.goto('/desk');
    await tobiah.page.getByLabel('Reference, project or organisation').fill(machine.reference);
    await tobiah.page.getByRole('button', { name: 'Apply filters' }).click();
    await tobiah.page.getByRole('link', { name: machine.reference, exact: true }).click();
    for (const each of [page, tobiah.page]) {
      await each.getByRole('region', { name: 'Progress of the screening run' }).waitFor();
      await markDocument(each);
    }
  } finally {
    letWorkerGo();
  }
  for (const each of [page, tobiah.page]) {
    await findings(each).first().waitFor();
    expect(await isSameDocument(each)).toBe(true);
    await each.getByRole('heading', { name: 'Preliminary findings' }).waitFor();
  }
  const [applicants, reviewers] = [await readFindings(page), await readFindings(tobiah.page)];
  expect(applicants.map(({ verdict }) => verdict)).toContain('Outside the limit');
  expect(applicants.every(({ element }) => element === undefined)).toBe(true);
  expect(reviewers.some(({ element }) => element !== undefined)).toBe(true);
  expect(await readFeeder(solar)).not.toBe(await readFeeder(machine));
});

async function readFeeder({ id }: HandedIn): Promise<string> {
  await ines.page.goto(`/projects/${id}`);
  return ines.page.locator('dt:text-is("Feeder") + dd').innerText();
}

async function confirmComplete(project: HandedIn): Promise<void> {
  const { page } = tobiah;
  await openFolder(page, project, 'findings');
  await page.getByRole('button', { name: 'Take this folder' }).click();
  await page.getByText('The folder is yours').waitFor();
  await page.getByRole('button', { name: 'Confirm complete' }).click();
  await markDocument(page);
  await page.getByRole('dialog').getByRole('button', { name: 'Confirm complete' }).click();
  await page.getByRole('heading', { name: /^Findings/ }).waitFor();
  await page.getByText('Initial review', { exact: true }).first().waitFor();
  await findings(page).first().waitFor({ state: 'attached' });
  expect(await isSameDocument(page)).toBe(true);
}

test('the reviewer takes both folders and confirms both complete, and the official findings come by themselves', async () => {
  const { page } = tobiah;
  // The preliminary findings stand there until the official run has ended.
  const patience = { timeout: 30_000 };
  await confirmComplete(solar);
  const listVerdicts = async () =>
    [...new Set((await readFindings(page)).map(({ verdict }) => verdict))].sort();
  await expect.poll(listVerdicts, patience).toEqual(['Does not apply', 'Within the limit']);
  await confirmComplete(machine);
  const countOutside = async () => {
    const outside = (await readFindings(page)).filter(({ verdict }) => verdict === 'Outside the limit');
    return new Set(outside.map(({ question }) => question)).size;
  };
  await expect.poll(countOutside, patience).toBeGreaterThan(1);
});

const reasons = {
  machine: 'Fault duty and grounding are outside their limits; a study has to say what must be changed.',
  solar: 'All that was asked is within its limit; the rest was answered from the records of the feeder.',
};

async function decide(project: HandedIn, decision: string, reason: string): Promise<void> {
  const { page } = tobiah;
  await openFolder(page, project, 'decision');
  await page.getByLabel(decision, { exact: true }).check();
  await page.getByLabel('Reason').fill(reason);
  await page.getByRole('button', { name: 'Record decision' }).click();
  await page.getByText('The decision is recorded and the applicant is told').waitFor();
}

test('the reviewer requires a study for the machine and approves the solar project, each with a reason', async () => {
  await decide(machine, 'Require a study', reasons.machine);
  await decide(solar, 'Approve', reasons.solar);
  const { page } = ines;
  for (const [project, words] of [
    [machine, 'Study required'],
    [solar, 'Approved'],
  ] as const) {
    await page.goto(`/projects/${project.id}`);
    await page.getByRole('heading', { name: /^Findings/ }).waitFor();
    await page.locator('.strip').getByText(words, { exact: true }).waitFor();
  }
  await page.getByText(reasons.solar).first().waitFor();
});

test('the mailbox page holds every message of both, readable as text and in its frame', async () => {
  const { page } = ines;
  await page.goto('/mailbox');
  for (const [project, decision] of [
    [solar, 'approved'],
    [machine, 'a study is required'],
  ] as const) {
    const subjects = [
      'we have received your application',
      'the first screening is done',
      'your application is complete',
      'the screening is done',
      decision,
    ].map((words) => `${project.reference}: ${words}`);
    const list = page.getByRole('navigation', { name: 'Messages, newest first' });
    for (const subject of subjects) await list.getByText(subject, { exact: true }).waitFor();
  }
  for (const [project, reason, decision] of [
    [solar, reasons.solar, 'approved'],
    [machine, reasons.machine, 'a study is required'],
  ] as const) {
    expect(await readMail(page, `${project.reference}: ${decision}`)).toContain(reason);
  }
  expect(ines.errors).toEqual([]);
});

/** Opens a message, sees that the frame shows it too, and gives its plain text. */
async function readMail(page: Page, subject: string): Promise<string> {
  await page.getByRole('link', { name: subject }).click();
  await page.getByRole('heading', { level: 2, name: subject }).waitFor();
  const frame = page.locator('iframe');
  expect(await frame.getAttribute('sandbox')).toBe('');
  await page.frameLocator('iframe').getByRole('link', { name: 'Open the application' }).waitFor();
  await page.getByLabel('Plain text').check();
  return page.locator('article pre').innerText();
}

async function runDownloadedStudy(project: HandedIn): Promise<Finding[]> {
  const { page } = tobiah;
  await openFolder(page, project, 'findings');
  const waiting = page.waitForEvent('download');
  await page.getByRole('link', { name: 'Download the study file' }).click();
  const file = join(directory, `${project.reference}.json`);
  await (await waiting).saveAs(file);
  const { stdout } = await promisify(execFile)('npm', ['run', '--silent', 'study', '--', file], {
    maxBuffer: 256 * 1024 * 1024,
  });
  return (JSON.parse(stdout) as StudyResult).findings;
}

/** How a finding stands in the text of a decision mail. */
function mailWords(finding: Finding): string {
  const { verdict, value, limit, isYesOrNo } = describeFinding(finding);
  const [valueName, limitName] = isYesOrNo ? ['Answer', 'Expected'] : ['Computed', 'Limit'];
  return `${finding.question}\n  ${verdict}\n  ${valueName}: ${value}\n  ${limitName}: ${limit}\n`;
}

test.each(['solar', 'machine'] as const)(
  'the study file of the %s project gives the numbers of the screen and of the decision mail',
  async (which) => {
    const project = which === 'solar' ? solar : machine;
    const computed = await runDownloadedStudy(project);
    const shown = await readFindings(tobiah.page);
    const expected = computed.map((finding) => {
      const { verdict, value, limit } = describeFinding(finding);
      const isMeasured = finding.value !== null && finding.limit !== null;
      const { question, element } = finding;
      return {
        question,
        element,
        verdict,
        ...(isMeasured ? { value, limit } : { value: null, limit: null }),
      };
    });
    expect(expected.filter(({ value }) => value !== null).length).toBeGreaterThan(2);
    expect(shown).toHaveLength(expected.length);
    expect(shown).toEqual(expect.arrayContaining(expected));

    await ines.page.goto('/mailbox');
    const decision = which === 'solar' ? 'approved' : 'a study is required';
    const text = await readMail(ines.page, `${project.reference}: ${decision}`);
    for (const finding of releaseFindings(computed)) expect(text).toContain(mailWords(finding));
  },
);

test('nothing was asked of any other place than the desk, and no page complained', () => {
  for (const visit of [ines, tobiah]) {
    expect(visit.requests.length).toBeGreaterThan(50);
    expect(listForeign(visit)).toEqual([]);
    expect(visit.errors).toEqual([]);
  }
});
