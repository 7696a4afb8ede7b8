import type { Response } from 'supertest';
import { answerSections, type Answers } from '../../shared/schemas/answers.ts';
import type { ApplicationView, DraftView } from '../../shared/schemas/applications.ts';
import type { Browser } from './test-app.ts';

/** Begins an application and saves these parts of it, as the form does. */
export async function fillDraft(browser: Browser, answers: Answers): Promise<DraftView> {
  const started = await browser.send('post', '/api/applications', {}).expect(201);
  let draft = started.body as DraftView;
  for (const section of answerSections) {
    if (answers[section] !== undefined) draft = await saveSection(browser, draft, section, answers[section]);
  }
  return draft;
}

export async function saveSection(
  browser: Browser,
  draft: DraftView,
  section: string,
  answers: unknown,
): Promise<DraftView> {
  const answer = await browser.send('put', `/api/applications/${draft.applicationId}/draft/${section}`, {
    version: draft.version,
    answers,
  });
  if (answer.status !== 200) throw new Error(`${section} was not saved: ${answer.text}`);
  return answer.body as DraftView;
}

/** Presses the button, whatever comes of it. */
export async function pressSubmit(browser: Browser, draft: DraftView): Promise<Response> {
  return browser.send('post', `/api/applications/${draft.applicationId}/submission`, {
    version: draft.version,
    attestedBy: 'Ada Brenn',
    agrees: true,
  });
}

/** The whole way from nothing to a submitted application. */
export async function handIn(browser: Browser, answers: Answers): Promise<ApplicationView> {
  const answer = await pressSubmit(browser, await fillDraft(browser, answers));
  if (answer.status !== 200) throw new Error(`Not submitted: ${answer.text}`);
  return answer.body as ApplicationView;
}
