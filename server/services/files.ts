import { join } from 'node:path';
import { fileTypeFromFile } from 'file-type';
import { inTransaction, type Transaction } from '../../db/connection.ts';
import {
  deleteFile,
  findFile,
  insertFile,
  listKnownPaths,
  listUnusedFiles,
  measureUnusedUploads,
  type Paper,
  type StoredFile,
} from '../../db/repositories/files.ts';
import { lockOrganisation } from '../../db/repositories/organisations.ts';
import { fileKinds, type FileMediaType, type FileView, type PaperView } from '../../shared/schemas/files.ts';
import type { Context, Deps, SignedInContext } from '../context.ts';
import { AppError, invalid, notAllowed, notFound, refused } from '../errors.ts';
import { findKindProblem, findNameProblem } from './file-names.ts';
import { keepFile, listOldUploads, removeFile, removeOldArrivals } from './file-storage.ts';
import { newPublicId } from './public-ids.ts';

/** A file as it arrived, under a temporary name. */
export interface ArrivedFile {
  path: string;
  originalName: string;
  sizeBytes: number;
}

function refuse(message: string): AppError {
  return invalid([{ path: 'file', message }], message);
}

async function findMediaType(arrived: ArrivedFile): Promise<FileMediaType> {
  const nameProblem = findNameProblem(arrived.originalName);
  if (nameProblem !== undefined) throw refuse(nameProblem);
  if (arrived.sizeBytes === 0) throw refuse('The file is empty; choose one that holds something');
  const found = await fileTypeFromFile(arrived.path);
  const kindProblem = findKindProblem(arrived.originalName, found?.mime);
  if (kindProblem !== undefined) {
    throw new AppError(415, 'wrong-kind', kindProblem, [{ path: 'file', message: kindProblem }]);
  }
  if (found === undefined || !(found.mime in fileKinds)) {
    throw new Error(`File kind: got ${found?.mime}, expected one of ${Object.keys(fileKinds).join(', ')}`);
  }
  return found.mime as FileMediaType;
}

export function toFileView(file: StoredFile): FileView {
  return {
    publicId: file.publicId,
    name: file.originalName,
    mediaType: file.mediaType,
    sizeBytes: file.sizeBytes,
    uploadedAt: file.uploadedAt.toISOString(),
  };
}

export function toPaperView(paper: Paper): PaperView {
  return { ...toFileView(paper), purpose: paper.purpose };
}

/** What one organisation may have uploaded without handing it in: the disk is everybody's. */
const mostUnusedFiles = 200;
const mostUnusedBytes = 500 * 1024 * 1024;

function tooMany(): AppError {
  const most = `${mostUnusedFiles} files or ${mostUnusedBytes / 1024 / 1024} MB`;
  const words = `Your organisation may keep ${most} that are not handed in yet. Submit or discard a draft first; files that no draft names are removed after a day.`;
  return refused('too-many-files', words, [{ path: 'file', message: words }]);
}

async function insertUpload(trx: Transaction, file: Omit<StoredFile, 'id'>): Promise<number> {
  await lockOrganisation(trx, file.organisationId);
  const unused = await measureUnusedUploads(trx, file.organisationId);
  if (unused.count >= mostUnusedFiles || unused.bytes + file.sizeBytes > mostUnusedBytes) throw tooMany();
  return insertFile(trx, file);
}

async function storeFile(deps: Deps, context: SignedInContext, arrived: ArrivedFile): Promise<FileView> {
  const { organisationId, id: uploadedBy } = context.actor;
  if (organisationId === null) throw notAllowed();
  const mediaType = await findMediaType(arrived);
  const kept = await keepFile(deps.config.filesDir, arrived.path);
  const file = {
    ...kept,
    publicId: newPublicId(),
    organisationId,
    sizeBytes: arrived.sizeBytes,
    mediaType,
    originalName: arrived.originalName,
    uploadedBy,
    uploadedAt: context.now,
  };
  // Without its row the file is an orphan, which the sweep removes; one that is refused is not kept for it.
  try {
    const id = await inTransaction(deps.db, (trx) => insertUpload(trx, file));
    return toFileView({ id, ...file });
  } catch (error) {
    if (error instanceof AppError) await removeFile(join(deps.config.filesDir, kept.path));
    throw error;
  }
}

/** Checks an arrived file, keeps it for the actor's organisation, and leaves nothing behind when it refuses. */
export async function uploadFile(
  deps: Deps,
  context: SignedInContext,
  arrived: ArrivedFile | undefined,
): Promise<FileView> {
  if (arrived === undefined) throw refuse('Choose a file');
  try {
    return await storeFile(deps, context, arrived);
  } finally {
    await removeFile(arrived.path);
  }
}

export interface FileToSend extends FileView {
  absolutePath: string;
}

/** Who may have it was asked before (access.ts); this says where it lies. */
export async function getFileToSend(deps: Deps, publicId: string): Promise<FileToSend> {
  const file = await findFile(deps.db, publicId);
  if (file === undefined) throw notFound('The file');
  return { ...toFileView(file), absolutePath: join(deps.config.filesDir, file.path) };
}

const dayMilliseconds = 86_400_000;

/**
 * Removes, a day after they came: uploads that were broken off, files that never got a row, and files that no revision
 * and no draft names. Gives how many.
 */
export async function removeOrphanFiles(deps: Deps, context: Context): Promise<number> {
  const { filesDir } = deps.config;
  const before = new Date(context.now.getTime() - dayMilliseconds);
  let removed = await removeOldArrivals(filesDir, before);
  // The row goes first: between the two steps there is a file without a row, never a row without its file.
  for (const file of await listUnusedFiles(deps.db, before)) {
    await inTransaction(deps.db, (trx) => deleteFile(trx, file.id));
  }
  for await (const paths of listOldUploads(filesDir, before)) {
    const known = new Set(await listKnownPaths(deps.db, paths));
    for (const path of paths.filter((candidate) => !known.has(candidate))) {
      await removeFile(join(filesDir, path));
      removed += 1;
    }
  }
  return removed;
}
