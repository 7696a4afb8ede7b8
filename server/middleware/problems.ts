import type { ErrorRequestHandler } from 'express';
import type { Problem } from '../../shared/schemas/problems.ts';
import { AppError, notAllowed, tooLarge, unreadable, wrongKind } from '../errors.ts';

/** Faults that Express, its parsers and the upload reader raise, in words for the reader. */
const translations: Record<string, () => AppError> = {
  'entity.parse.failed': () => unreadable('malformed-json', 'What was sent is not readable as JSON'),
  'entity.too.large': () => tooLarge('What was sent is larger than 1 MB'),
  'encoding.unsupported': () => wrongKind('Send JSON without that content encoding'),
  'charset.unsupported': () => wrongKind('Send JSON in UTF-8'),
  'request.aborted': () => unreadable('aborted', 'The connection ended before everything was sent'),
  'request.size.invalid': () => unreadable('aborted', 'Less was sent than was announced'),
  EBADCSRFTOKEN: () => notAllowed('csrf', 'This page is out of date: load it again and repeat what you did'),
  LIMIT_FILE_SIZE: () => tooLarge('The file is larger than 20 MB'),
  LIMIT_UNEXPECTED_FILE: () => unreadable('unexpected-file', 'Send one file, in the field "file"'),
};

function translate(fault: unknown): AppError | undefined {
  if (fault instanceof AppError) return fault;
  const { type, code, status } = (fault ?? {}) as { type?: unknown; code?: unknown; status?: unknown };
  const known = translations[String(type)] ?? translations[String(code)];
  if (known !== undefined) return known();
  if (fault instanceof URIError) return unreadable('malformed-address', 'The address cannot be read');
  // Other faults that a library blames on the request: its words may hold what was sent, so they are not repeated.
  const blamed = typeof status === 'number' && status >= 400 && status < 500;
  return blamed
    ? new AppError(status, 'refused', 'The request cannot be answered as it was sent')
    : undefined;
}

function describeProblem(known: AppError | undefined, requestId: string): Problem {
  if (known !== undefined) {
    const { message: title, status, code, errors } = known;
    return { title, status, code, errors, requestId };
  }
  const title = 'Something went wrong on our side. Nothing you typed caused it.';
  return { title, status: 500, code: 'fault', errors: [], requestId };
}

/** Who asked went away in the middle of a download: nobody is left to answer, and nothing is wrong. */
function isGone(fault: unknown): boolean {
  return (fault as { code?: unknown } | null)?.code === 'ERR_STREAM_PREMATURE_CLOSE';
}

/** The one place where a fault becomes an answer. */
export const answerProblem: ErrorRequestHandler = (fault: unknown, request, response, next) => {
  if (isGone(fault)) return;
  const known = translate(fault);
  if (known === undefined) request.log.error({ err: fault }, 'unexpected fault');
  if (response.headersSent) return next(fault); // too late for words: Express breaks the connection off
  const problem = describeProblem(known, String(request.id));
  response.status(problem.status).set('cache-control', 'no-store');
  response.type('application/problem+json').send(JSON.stringify(problem));
};
