import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { demoPlaces } from '../../db/seeds/demo/feeders.ts';
import { launchBrowser } from '../support/browser.ts';
import { openSection, startDraft, typePin } from '../support/handing-in.ts';
import { openSignedIn } from '../support/visits.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
});

/** How far the middle of the territory is from the middle of its map, in pixels. */
function readOffCentre(page: Page): Promise<number> {
  return page.evaluate(() => {
    const middleOf = (selector: string) => {
      const { x, y, width, height } = document.querySelector(selector)!.getBoundingClientRect();
      return { x: x + width / 2, y: y + height / 2 };
    };
    const [ground, map] = [middleOf('.map-outline'), middleOf('.map-sheet')];
    return Math.hypot(ground.x - map.x, ground.y - map.y);
  });
}

test('a map that nobody has moved shows the whole territory, whatever size its window takes', async () => {
  const { page, context, settled } = await openSignedIn(browser, 'maren');
  await page.goto('/models');
  await settled();
  for (const [width, height] of [
    [1440, 900],
    [360, 780],
    [1440, 1250],
    [900, 700],
  ] as const) {
    await page.setViewportSize({ width, height });
    await expect.poll(() => readOffCentre(page)).toBeLessThan(12);
    // And it stays so: nothing pulls it away afterwards.
    await page.waitForTimeout(400);
    expect(await readOffCentre(page)).toBeLessThan(12);
  }
  await context.close();
});

test('a click puts the pin down, its place is written beside the map, and the next one is written too', async () => {
  const { page, context, settled } = await openSignedIn(browser, 'samir');
  await startDraft(page);
  await openSection(page, 'Site');
  await settled();
  await typePin(page, demoPlaces.solarSite);
  const place = page.getByLabel('Latitude, longitude');
  const { lat, lng } = demoPlaces.solarSite;
  expect(await place.inputValue()).toBe(`${lat.toFixed(6)}, ${lng.toFixed(6)}`);
  const readPlace = async () => (await place.inputValue()).split(', ').map(Number);
  const map = page.getByRole('application');
  const { width, height } = (await map.boundingBox())!;
  await map.click({ position: { x: width / 2, y: height / 2 } });
  const [firstLat, firstLng] = await readPlace();
  await map.click({ position: { x: width / 2 + 60, y: height / 2 - 40 } });
  const [secondLat, secondLng] = await readPlace();
  expect(secondLng).toBeGreaterThan(firstLng!);
  expect(secondLat).toBeGreaterThan(firstLat!);
  await settled();
  const answer = page.getByRole('region', { name: 'What is there' });
  expect(await answer.innerText()).toMatch(/Distance from the pin|Nothing that can take/);
  await context.close();
});
