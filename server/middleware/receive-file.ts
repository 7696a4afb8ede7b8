import { mkdirSync } from 'node:fs';
import type { RequestHandler } from 'express';
import multer from 'multer';
import { largestFileBytes } from '../../shared/schemas/files.ts';
import type { Deps } from '../context.ts';
import { unreadable } from '../errors.ts';
import { incomingDirectory } from '../services/file-storage.ts';
import { newPublicId } from '../services/public-ids.ts';

/** What the reader of forms says of a form that is none comes as a bare error; a fault of the disk has its code. */
function translate(error: unknown): unknown {
  const { code } = (error ?? {}) as { code?: unknown };
  if (!error || code === 'LIMIT_FILE_SIZE' || code === 'LIMIT_UNEXPECTED_FILE') return error;
  if (error instanceof multer.MulterError) return unreadable('form', 'Send one file, in the field "file"');
  return code === undefined
    ? unreadable('form', 'The upload could not be read; choose the file again')
    : error;
}

/** Streams the one file of a form to the disk; a larger one than allowed is broken off and removed (413). */
export function receiveFile({ config }: Deps): RequestHandler {
  const directory = incomingDirectory(config.filesDir);
  const receive = multer({
    storage: multer.diskStorage({
      destination(_request, _file, done) {
        mkdirSync(directory, { recursive: true });
        done(null, directory);
      },
      filename: (_request, _file, done) => done(null, newPublicId()),
    }),
    // Names are UTF-8, and a folder in a name is kept so that it can be refused instead of cut off unseen.
    defParamCharset: 'utf8',
    preservePath: true,
    limits: { fileSize: largestFileBytes, files: 1, fields: 0, parts: 1, headerPairs: 20 },
  }).single('file');
  return (request, response, next) => receive(request, response, (error: unknown) => next(translate(error)));
}
