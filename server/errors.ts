import type { FieldProblem } from '../shared/schemas/problems.ts';

/** A refusal meant for the reader: `message` is what the page shows, `code` what the client branches on. */
export class AppError extends Error {
  override name = 'AppError';
  readonly status: number;
  readonly code: string;
  readonly errors: FieldProblem[];

  constructor(status: number, code: string, message: string, errors: FieldProblem[] = []) {
    super(message);
    this.status = status;
    this.code = code;
    this.errors = errors;
  }
}

/** 400: what was sent does not have the shape or the values asked for. */
export function invalid(errors: FieldProblem[], message = 'Some answers need attention'): AppError {
  return new AppError(400, 'invalid', message, errors);
}

/** 400: the request cannot be read at all. */
export function unreadable(code: string, message: string): AppError {
  return new AppError(400, code, message);
}

/** 401: who asks is not known. */
export function notSignedIn(code = 'not-signed-in', message = 'Sign in to go on'): AppError {
  return new AppError(401, code, message);
}

/** 403: known, and may not. */
export function notAllowed(code = 'not-allowed', message = 'Your role does not allow this'): AppError {
  return new AppError(403, code, message);
}

/** 404: not there, or not theirs; both read alike. `what` begins the sentence: "The application". */
export function notFound(what = 'What you asked for'): AppError {
  return new AppError(404, 'not-found', `${what} is not there, or you may not see it`);
}

/** 409: somebody or something was faster, or the stage does not allow it. */
export function conflict(code: string, message: string): AppError {
  return new AppError(409, code, message);
}

/** 413 */
export function tooLarge(message: string): AppError {
  return new AppError(413, 'too-large', message);
}

/** 415 */
export function wrongKind(message: string): AppError {
  return new AppError(415, 'wrong-kind', message);
}

/** 422: well formed, and a rule says no. */
export function refused(code: string, message: string, errors: FieldProblem[] = []): AppError {
  return new AppError(422, code, message, errors);
}

/** 429 */
export function slowDown(message = 'Too many attempts; wait a moment and try again'): AppError {
  return new AppError(429, 'slow-down', message);
}
