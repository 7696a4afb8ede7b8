import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';
import type { Request, Response } from 'express';
import { limitArrivals } from '../middleware/rate-limits.ts';
import { receiveFile } from '../middleware/receive-file.ts';
import { route } from '../route-definition.ts';
import { getFileToSend, uploadFile, type ArrivedFile, type FileToSend } from '../services/files.ts';

function readArrived({ file }: Request): ArrivedFile | undefined {
  return file && { path: file.path, originalName: file.originalname, sizeBytes: file.size };
}

/** Always as an attachment: what a stranger wrote is never shown as a page of ours. */
async function sendFile(response: Response, file: FileToSend): Promise<void> {
  response.attachment(file.name);
  response.set({
    'content-type': file.mediaType,
    'content-length': String(file.sizeBytes),
    'x-content-type-options': 'nosniff',
    'content-security-policy': "default-src 'none'; sandbox",
  });
  await pipeline(createReadStream(file.absolutePath), response);
}

export const fileRoutes = [
  route({
    method: 'post',
    path: '/files',
    action: 'files.upload',
    before: (deps) => [limitArrivals(), receiveFile(deps)],
    status: 201,
    handle: ({ deps, context, request }) => uploadFile(deps, context, readArrived(request)),
  }),
  route({
    method: 'get',
    path: '/files/:id',
    action: 'file.read',
    handle: async ({ deps, params, response }) => sendFile(response, await getFileToSend(deps, params.id)),
  }),
];
