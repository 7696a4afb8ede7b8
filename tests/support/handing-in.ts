import type { Locator, Page } from 'playwright-core';

/** What a person types into the form; the rest is chosen the same way for every project. */
export interface ProjectStory {
  name: string;
  contactEmail: string;
  /** Puts the pin down, each project in its own way. */
  putPin(page: Page): Promise<void>;
  /** As its record is named in the list. */
  model: string;
  transformer: string;
  windings: string;
  /** In the neutral of the utility-side winding. */
  utilityReactorOhm?: number;
  /** Asked of synchronous machines only. */
  machineNeutral?: string;
  paper?: { name: string; content: Buffer };
}

const section = (page: Page, title: string) => page.getByRole('heading', { level: 1, name: title }).waitFor();
const saveAndGoOn = (page: Page) => page.getByRole('button', { name: 'Save and go on' }).click();

/** Chooses the option that begins so, as a person reads the list. */
async function choose(select: Locator, beginning: string): Promise<void> {
  const option = select.locator('option').filter({ hasText: beginning }).first();
  await option.waitFor({ state: 'attached' });
  await select.selectOption(await option.getAttribute('value'));
}

export async function startDraft(page: Page): Promise<void> {
  await page.goto('/projects');
  await page.getByRole('button', { name: 'Start an application' }).click();
  await page.getByRole('heading', { level: 1, name: 'A new application' }).waitFor();
}

export async function openSection(page: Page, title: string): Promise<void> {
  await page.getByRole('main').getByRole('link', { name: title }).click();
  await section(page, title);
}

/** The pin as "latitude, longitude"; answered when the feeder near it is shown. */
export async function typePin(page: Page, { lat, lng }: { lat: number; lng: number }): Promise<void> {
  await page.getByLabel('Latitude, longitude').fill(`${lat}, ${lng}`);
  await page.getByRole('button', { name: 'Put the pin there' }).click();
  await page.locator('[data-snap="found"]').waitFor();
}

async function fillParts(page: Page, story: ProjectStory): Promise<void> {
  await page.getByLabel('Project name').fill(story.name);
  await page.getByLabel('Name of the person we write to').fill('Ines Varga');
  await page.getByLabel('E-mail address of that person').fill(story.contactEmail);
  await saveAndGoOn(page);

  await section(page, 'Site');
  await story.putPin(page);
  await saveAndGoOn(page);

  await section(page, 'Equipment');
  await choose(page.getByLabel('Model', { exact: true }), story.model);
  await saveAndGoOn(page);

  await section(page, 'Connection');
  await page.getByLabel('Three-phase', { exact: true }).check();
  await page.getByLabel('Yes', { exact: true }).check();
  await choose(page.getByLabel('Transformer', { exact: true }), story.transformer);
  await choose(page.getByLabel('Winding connection'), story.windings);
  if (story.utilityReactorOhm !== undefined) {
    const neutral = page.getByRole('group', { name: 'Neutral on the utility side' });
    await neutral.getByLabel('Grounded through a reactor or resistor', { exact: true }).check();
    await neutral.getByLabel('Reactance, in ohms').fill(String(story.utilityReactorOhm));
  }
  if (story.machineNeutral !== undefined) {
    const neutral = page.getByRole('group', { name: 'Neutral of the synchronous machines' });
    await neutral.getByLabel(story.machineNeutral, { exact: true }).check();
  }
  await saveAndGoOn(page);

  await section(page, 'Papers');
  if (story.paper !== undefined) {
    const { name, content } = story.paper;
    await page.getByLabel('Add papers').setInputFiles({ name, mimeType: 'application/pdf', buffer: content });
    await page.getByRole('main').getByRole('link', { name }).waitFor();
  }
  await saveAndGoOn(page);
}

/** From "Start an application" to the check of all answers. */
export async function fillApplication(page: Page, story: ProjectStory): Promise<void> {
  await startDraft(page);
  await openSection(page, 'Project and contact');
  await fillParts(page, story);
  await openSection(page, 'Check answers and submit');
}

export interface HandedIn {
  id: string;
  /** As people quote it: "ML-1042". */
  reference: string;
}

export async function submitApplication(page: Page): Promise<HandedIn> {
  await page.getByLabel('Your full name').fill('Ines Varga');
  await page.getByLabel('The answers and papers are true').check();
  await page.getByRole('button', { name: 'Submit application' }).click();
  await page.waitForURL('**/submitted');
  const reference = await page.getByRole('heading', { level: 1 }).innerText();
  const id = new URL(page.url()).pathname.split('/')[2] ?? '';
  return { id, reference };
}
