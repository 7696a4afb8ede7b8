import type { Browser, BrowserContext, Page, Request } from 'playwright-core';
import { demoPeople } from '../../db/seeds/demo/people.ts';
import { getSharedDesk } from './shared-desk.ts';

/** One person at one browser, and all that the browser says meanwhile. */
export interface Visit {
  context: BrowserContext;
  page: Page;
  /** Errors on the console (a content security policy that was broken is one of them) and faults nobody caught. */
  errors: string[];
  /** Every address the browser asked for. */
  requests: string[];
  /** Answered when the page is there and nothing has been asked of the server for a moment, whatever stream is open. */
  settled(): Promise<void>;
}

interface VisitOptions {
  width?: number;
  height?: number;
  /** Cuts the live stream, as a proxy that does not know it would. */
  withoutLiveEvents?: boolean;
}

const quietMs = 120;

function followRequests(page: Page, url: string): () => Promise<void> {
  const open = new Set<Request>();
  let lastChange = Date.now();
  const isCounted = (request: Request) => !request.url().startsWith(`${url}/api/events`);
  page.on('request', (request) => {
    if (isCounted(request)) open.add(request);
    lastChange = Date.now();
  });
  const end = (request: Request) => {
    if (open.delete(request)) lastChange = Date.now();
  };
  page.on('requestfinished', end);
  page.on('requestfailed', end);
  return async () => {
    await page.locator('h1').first().waitFor();
    await page.locator('[aria-busy="true"]').first().waitFor({ state: 'detached' });
    const giveUpAt = Date.now() + 20_000;
    while (open.size > 0 || Date.now() - lastChange < quietMs) {
      if (Date.now() > giveUpAt) {
        throw new Error(`Not answered within 20 s: ${[...open].map((request) => request.url()).join(', ')}`);
      }
      await page.waitForTimeout(30);
    }
  };
}

export async function openVisit(browser: Browser, options: VisitOptions = {}): Promise<Visit> {
  const { url } = getSharedDesk();
  const { width = 1440, height = 900, withoutLiveEvents = false } = options;
  const context = await browser.newContext({
    baseURL: url,
    viewport: { width, height },
    reducedMotion: 'reduce',
    acceptDownloads: true,
  });
  if (withoutLiveEvents) await context.route('**/api/events', (route) => route.abort());
  context.setDefaultTimeout(20_000);
  const errors: string[] = [];
  const requests: string[] = [];
  context.on('console', (message) => {
    if (message.type() === 'error') errors.push(`${message.text()} (${message.location().url})`);
  });
  context.on('weberror', (fault) => errors.push(String(fault.error().stack)));
  context.on('request', (request) => requests.push(request.url()));
  const page = await context.newPage();
  return { context, page, errors, requests, settled: followRequests(page, url) };
}

/** Everything that came from elsewhere than the desk. */
export function listForeign(visit: Visit): string[] {
  const { origin } = new URL(getSharedDesk().url);
  return visit.requests.filter((address) => new URL(address).origin !== origin);
}

/** `firstName` as in the demo's e-mail addresses: ines, tobiah, … */
export async function signIn(visit: Visit, firstName: string): Promise<void> {
  const person = demoPeople.find(({ email }) => email.startsWith(`${firstName}@`));
  if (person === undefined) throw new Error(`Demo person: got ${firstName}, expected one of the demo`);
  const { page } = visit;
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.waitForURL((address) => !address.pathname.startsWith('/sign-in'));
}

/** A visit of somebody who is signed in already. */
export async function openSignedIn(
  browser: Browser,
  firstName: string,
  options?: VisitOptions,
): Promise<Visit> {
  const visit = await openVisit(browser, options);
  await signIn(visit, firstName);
  return visit;
}
