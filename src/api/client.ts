/** The only place that talks to the server. Every failure leaves here as an `ApiProblem`. */
import type { FieldProblem, Problem } from '../../shared/schemas/problems.ts';
import type { SessionView } from '../../shared/schemas/sessions.ts';

export class ApiProblem extends Error {
  override readonly name = 'ApiProblem';
  readonly status: number;
  readonly code: string;
  readonly errors: readonly FieldProblem[];
  readonly requestId: string | undefined;

  constructor(problem: Problem) {
    super(problem.title);
    this.status = problem.status;
    this.code = problem.code;
    this.errors = problem.errors;
    this.requestId = problem.requestId;
  }
}

type Method = 'POST' | 'PUT' | 'DELETE';
type QueryValue = string | number | boolean | undefined;

// Kept in memory only: the token belongs to the session cookie and comes with every answer about the session.
let csrfToken = '';
let signedInId: string | undefined;
let signedOutListener: () => void = () => undefined;

/** Takes the token out of an answer of /api/session. */
export function rememberToken(session: SessionView): SessionView {
  csrfToken = session.csrfToken;
  signedInId = session.user?.publicId;
  return session;
}

/** Called whenever the server answers that nobody is signed in any more. */
export function whenSignedOut(listener: () => void): void {
  signedOutListener = listener;
}

const unreachable: Problem = {
  title: 'The server could not be reached. Check your connection and try again.',
  status: 0,
  code: 'unreachable',
  errors: [],
};

/** Anything that is not a problem document (a proxy's page, an empty body) becomes one with plain words. */
export function toProblem(status: number, body: unknown): ApiProblem {
  const given = (typeof body === 'object' && body !== null ? body : {}) as Partial<Problem>;
  return new ApiProblem({
    title: typeof given.title === 'string' ? given.title : 'Something went wrong on our side.',
    status,
    code: typeof given.code === 'string' ? given.code : 'unexpected-answer',
    errors: Array.isArray(given.errors) ? given.errors : [],
    requestId: given.requestId,
  });
}

function readBody(text: string): unknown {
  if (text === '') return undefined;
  try {
    return JSON.parse(text) as unknown;
  } catch {
    // Not JSON: the caller has the status, and no part of a foreign page is shown to anyone.
    return undefined;
  }
}

async function reach(url: string, init: RequestInit): Promise<{ status: number; body: unknown }> {
  try {
    const response = await fetch(url, { credentials: 'same-origin', ...init });
    return { status: response.status, body: readBody(await response.text()) };
  } catch (cause) {
    if (cause instanceof DOMException && cause.name === 'AbortError') throw cause;
    throw new ApiProblem(unreachable);
  }
}

function settle<T>({ status, body }: { status: number; body: unknown }): T {
  if (status >= 200 && status < 300) return body as T;
  if (status === 401) signedOutListener();
  throw toProblem(status, body);
}

const isStaleToken = (answer: { status: number; body: unknown }) =>
  answer.status === 403 && (answer.body as Partial<Problem> | undefined)?.code === 'csrf';

const otherPerson: Problem = {
  title: 'Another person has signed in in this browser. Load the page again.',
  status: 403,
  code: 'other-person',
  errors: [],
};

/** What was written by one person is never sent in the name of another, who signed in in another tab. */
async function refreshToken(): Promise<void> {
  const before = signedInId;
  const session = await getJson<SessionView>('/api/session');
  if (session.user?.publicId !== before) throw new ApiProblem(otherPerson);
  rememberToken(session);
}

export async function getJson<T>(
  path: string,
  query: Record<string, QueryValue> = {},
  signal?: AbortSignal,
): Promise<T> {
  const given = Object.entries(query).filter(([, value]) => value !== undefined && value !== '');
  const search = new URLSearchParams(given.map(([name, value]) => [name, String(value)])).toString();
  const url = search === '' ? path : `${path}?${search}`;
  return settle<T>(await reach(url, { headers: { accept: 'application/json' }, signal }));
}

export async function sendJson<T>(method: Method, path: string, body?: unknown): Promise<T> {
  const send = () =>
    reach(path, {
      method,
      headers: {
        accept: 'application/json',
        'x-csrf-token': csrfToken,
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
      },
      body: body === undefined ? undefined : JSON.stringify(body),
    });
  const first = await send();
  if (!isStaleToken(first)) return settle<T>(first);
  await refreshToken();
  return settle<T>(await send());
}

/** XMLHttpRequest, because fetch does not tell how much of a body has been sent. */
function sendFile(path: string, file: File, onProgress: (percent: number) => void) {
  return new Promise<{ status: number; body: unknown }>((resolve, reject) => {
    const request = new XMLHttpRequest();
    const form = new FormData();
    form.append('file', file);
    request.upload.onprogress = (event) => {
      if (event.lengthComputable) onProgress((event.loaded / event.total) * 100);
    };
    request.onload = () => resolve({ status: request.status, body: readBody(request.responseText) });
    request.onerror = () => reject(new ApiProblem(unreachable));
    request.open('POST', path);
    request.setRequestHeader('accept', 'application/json');
    request.setRequestHeader('x-csrf-token', csrfToken);
    request.send(form);
  });
}

export async function uploadFile<T>(
  path: string,
  file: File,
  onProgress: (percent: number) => void,
): Promise<T> {
  const first = await sendFile(path, file, onProgress);
  if (!isStaleToken(first)) return settle<T>(first);
  await refreshToken();
  return settle<T>(await sendFile(path, file, onProgress));
}
