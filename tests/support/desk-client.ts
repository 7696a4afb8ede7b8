import type { CompleteAnswers } from '../../shared/schemas/answers.ts';
import type { ApplicationView, DraftView } from '../../shared/schemas/applications.ts';
import type { SessionView } from '../../shared/schemas/sessions.ts';

/** What a page of the desk does, by plain requests to a server that runs as a process of its own. */
export class DeskClient {
  private readonly url: string;
  private cookie = '';
  private csrfToken = '';

  constructor(url: string) {
    this.url = url;
  }

  async ask<T>(method: string, path: string, body?: object): Promise<T> {
    const answer = await fetch(`${this.url}/api${path}`, {
      method,
      headers: {
        cookie: this.cookie,
        'x-csrf-token': this.csrfToken,
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
      },
      ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    });
    const cookies = answer.headers.getSetCookie();
    if (cookies.length > 0) this.cookie = cookies.map((cookie) => cookie.split(';')[0]).join('; ');
    const text = await answer.text();
    if (!answer.ok) throw new Error(`${method} ${path}: ${answer.status} ${text}`);
    return (text === '' ? undefined : JSON.parse(text)) as T;
  }

  async signIn(email: string, password: string): Promise<void> {
    this.csrfToken = (await this.ask<SessionView>('GET', '/session')).csrfToken;
    this.csrfToken = (await this.ask<SessionView>('POST', '/session', { email, password })).csrfToken;
  }

  /** A draft with every part filled in. */
  async writeDraft(answers: CompleteAnswers): Promise<DraftView> {
    let draft = await this.ask<DraftView>('POST', '/applications', {});
    for (const [section, given] of Object.entries(answers)) {
      const path = `/applications/${draft.applicationId}/draft/${section}`;
      draft = await this.ask<DraftView>('PUT', path, { version: draft.version, answers: given });
    }
    return draft;
  }

  getApplication(id: string): Promise<ApplicationView> {
    return this.ask('GET', `/applications/${id}`);
  }

  /** Does something to the application as it is now. */
  async act(id: string, what: string, body: object = {}): Promise<ApplicationView> {
    const { version } = await this.getApplication(id);
    return this.ask('POST', `/applications/${id}/${what}`, { version, ...body });
  }
}

export const attestation = { attestedBy: 'Ada Brenn', agrees: true };
