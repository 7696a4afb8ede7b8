import { Type } from '@sinclair/typebox';

/* Text that people type: something must be there, and nothing that a reader cannot see. */

/** Control characters, marks that turn the direction of writing, halves of surrogate pairs. */
const unseen =
  '\\u0000-\\u0008\\u000B\\u000C\\u000E-\\u001F\\u007F-\\u009F\\u202A-\\u202E\\u2066-\\u2069\\uD800-\\uDFFF';
const lines = `^(?=[\\s\\S]*\\S)[^${unseen}]*$`;
const line = `^(?=.*\\S)[^${unseen}\\n\\r\\t\\u2028\\u2029]*$`;

/** One line, such as a name; `words` is what a refusal says. */
export const oneLine = (words: string, maxLength: number, minLength = 1) =>
  Type.String({ minLength, maxLength, pattern: line, errorMessage: words });

/** Text of several lines, such as a reason. */
export const manyLines = (words: string, maxLength: number, minLength = 1) =>
  Type.String({ minLength, maxLength, pattern: lines, errorMessage: words });
