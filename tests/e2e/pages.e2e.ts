import { AxeBuilder } from '@axe-core/playwright';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Worklist } from '../../shared/schemas/applications.ts';
import { demoPlaces } from '../../db/seeds/demo/feeders.ts';
import { typePin } from '../support/handing-in.ts';
import { launchBrowser } from '../support/browser.ts';
import { listForeign, openSignedIn, openVisit, type Visit } from '../support/visits.ts';

/* Every page as each role sees it: what a machine can say of its access, and what the browser says of its loading. */

const rules = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

interface Stop {
  path: string;
  /** Opens something on the page first: a dialog, a part that is folded away. */
  act?: (page: Page) => Promise<void>;
}

const press = (name: string) => (page: Page) => page.getByRole('button', { name, exact: true }).click();
const unfold = async (page: Page) => {
  for (const summary of await page.locator('summary').all()) await summary.click();
};
const openFirstMessage = (page: Page) =>
  page.getByRole('navigation', { name: 'Messages, newest first' }).getByRole('link').first().click();

/** Leads from the form to the report itself. */
const askForReport = async (page: Page) => {
  await typePin(page, demoPlaces.solarSite);
  await press('Ask for the report')(page);
  await page.getByRole('heading', { level: 1, name: 'Pre-application report' }).waitFor();
};

async function findApplication({ context }: Visit, query: string): Promise<string> {
  const answer = await context.request.get(`/api/applications?page=1&pageSize=1&${query}`);
  const [row] = ((await answer.json()) as Worklist).rows;
  if (row === undefined) throw new Error(`Applications with ${query}: got none, expected one of the demo`);
  return row.publicId;
}

const sheets = ['findings', 'trials', 'site', 'equipment', 'papers', 'decision'];

/** What everybody at the utility sees. */
async function listDeskStops(visit: Visit): Promise<Stop[]> {
  const reviewed = await findApplication(visit, 'stage=initial-review');
  return [
    { path: '/desk' },
    ...sheets.map((sheet) => ({ path: `/desk/${reviewed}?sheet=${sheet}` })),
    { path: '/models' },
    { path: '/models/MB/room' },
    { path: '/mailbox' },
  ];
}

/** The others at the utility see the same pages with less to press: those that differ most, and no page twice. */
async function listReaderStops(visit: Visit): Promise<Stop[]> {
  const reviewed = await findApplication(visit, 'stage=initial-review');
  return [{ path: '/desk' }, { path: `/desk/${reviewed}?sheet=findings` }];
}

async function listReviewStops(visit: Visit): Promise<Stop[]> {
  const reviewed = await findApplication(visit, 'stage=initial-review');
  const approved = await findApplication(visit, 'stage=approved');
  const received = await findApplication(visit, 'stage=submitted');
  return [
    { path: '/desk?stage=initial-review&outside=true&sort=due&direction=asc' },
    { path: '/desk?search=nothing-is-called-so' },
    { path: `/desk/${reviewed}`, act: unfold },
    { path: `/desk/${reviewed}?sheet=record` },
    { path: `/desk/${approved}?sheet=decision` },
    { path: `/desk/${received}`, act: press('Confirm complete') },
    { path: `/desk/${received}`, act: press('Say what is missing') },
    { path: '/desk/AAAAAAAAAAAAAAAAAAAAAA' },
    { path: '/models?model=MB' },
  ];
}

async function listRecordStops(visit: Visit): Promise<Stop[]> {
  const reviewed = await findApplication(visit, 'stage=initial-review');
  return [{ path: `/desk/${reviewed}?sheet=record` }, { path: '/settings' }];
}

const draftRules = '/settings/rule-sets/85-percent/1';
const ruleStops: Stop[] = [
  { path: draftRules },
  ...['sizes', 'protection', 'fees'].map((area) => ({ path: `${draftRules}/${area}` })),
  { path: `${draftRules}/publish`, act: press('Publish') },
];

const parts = ['project', 'site', 'equipment', 'connection', 'papers'];

const stops: Record<string, (visit: Visit) => Promise<Stop[]>> = {
  async ines(visit) {
    const draft = await findApplication(visit, 'stage=draft');
    const reviewed = await findApplication(visit, 'stage=initial-review');
    const incomplete = await findApplication(visit, 'stage=incomplete');
    return [
      { path: '/projects' },
      { path: `/projects/${draft}/form` },
      { path: `/projects/${draft}/form`, act: press('Throw this draft away') },
      ...parts.map((part) => ({ path: `/projects/${draft}/form/${part}` })),
      { path: `/projects/${draft}/form/check`, act: press('Submit application') },
      { path: `/projects/${reviewed}` },
      { path: `/projects/${reviewed}/submitted` },
      { path: `/projects/${incomplete}` },
      { path: `/projects/${incomplete}/form` },
      { path: '/reports' },
      { path: '/reports/new', act: press('Ask for the report') },
      { path: '/reports/new', act: askForReport },
      { path: '/mailbox' },
      { path: '/mailbox', act: openFirstMessage },
      { path: '/desk' },
      { path: '/not-a-page' },
      { path: '/projects/AAAAAAAAAAAAAAAAAAAAAA' },
    ];
  },
  tobiah: async (visit) => [...(await listDeskStops(visit)), ...(await listReviewStops(visit))],
  maren: async (visit) => [
    ...(await listReaderStops(visit)),
    { path: '/models' },
    { path: '/models/MB/room' },
  ],
  adaeze: async (visit) => [
    ...(await listReaderStops(visit)),
    ...(await listRecordStops(visit)),
    ...ruleStops,
  ],
  pell: async (visit) => [
    ...(await listReaderStops(visit)),
    ...(await listRecordStops(visit)),
    { path: '/reports' },
  ],
};

interface Fault {
  at: string;
  what: string;
}

async function listAxeFaults(page: Page): Promise<string[]> {
  // One frame only: mail lies in a frame that lets no script run, axe's neither.
  const axe = new AxeBuilder({ page }).options({ resultTypes: ['violations'] }).withTags(rules);
  const { violations } = await axe.setLegacyMode().analyze();
  return violations.map(
    ({ id, help, nodes }) => `${id}: ${help} (${nodes.map((n) => n.target).join(' · ')})`,
  );
}

/** What is wider than the page, by the ends that stick out. */
function listOverflow(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    const width = document.documentElement.clientWidth;
    if (document.documentElement.scrollWidth <= width) return [];
    const wide = [...document.querySelectorAll('body *')].filter(
      (element) => element.getBoundingClientRect().right > width + 1,
    );
    const names = wide.slice(-5).map((element) => `${element.tagName}.${element.getAttribute('class')}`);
    return [`${document.documentElement.scrollWidth} px wide at ${width} px: ${names.join(' ')}`];
  });
}

async function listHeadFaults(page: Page): Promise<string[]> {
  const faults: string[] = [];
  const headings = await page.locator('h1').count();
  if (headings !== 1) faults.push(`${headings} h1, expected one`);
  const title = await page.title();
  if (!/^\S.* – Feederwright$/.test(title)) faults.push(`title “${title}”`);
  return faults;
}

async function walk(visit: Visit, route: readonly Stop[]): Promise<Fault[]> {
  const { page, settled } = visit;
  const faults: Fault[] = [];
  for (const { path, act } of route) {
    await page.setViewportSize({ width: 1440, height: 900 });
    await page.goto(path);
    await settled();
    await act?.(page);
    await settled();
    const found = [...(await listHeadFaults(page)), ...(await listAxeFaults(page))];
    await page.setViewportSize({ width: 360, height: 780 });
    found.push(...(await listOverflow(page)));
    faults.push(...found.map((what) => ({ at: path, what })));
  }
  return faults;
}

/** Chromium writes a refusal to the console, too; these were asked for. */
const isRefusal = (words: string) =>
  /status of (400|404)/.test(words) && /A{22}|\/submission|\/session|\/pre-application-reports/.test(words);

describe.concurrent('every page', { timeout: 300_000 }, () => {
  async function check(visit: Visit, route: readonly Stop[]): Promise<void> {
    expect(await walk(visit, route)).toEqual([]);
    expect(visit.errors.filter((words) => !isRefusal(words))).toEqual([]);
    expect(listForeign(visit)).toEqual([]);
    await visit.context.close();
  }

  test.each(Object.keys(stops))('as %s sees it is without fault, wide and narrow', async (person) => {
    const visit = await openSignedIn(browser, person);
    await check(visit, await stops[person]!(visit));
  });

  test('before anybody has signed in is without fault too', async () => {
    const route = [{ path: '/' }, { path: '/sign-in', act: press('Sign in') }, { path: '/not-allowed' }];
    await check(await openVisit(browser), route);
  });
});
