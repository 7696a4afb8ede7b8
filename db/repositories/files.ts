import type { PaperPurpose } from '../../shared/schemas/answers.ts';
import type { FileMediaType } from '../../shared/schemas/files.ts';
import type { Database } from '../connection.ts';

export interface StoredFile {
  id: number;
  publicId: string;
  organisationId: number;
  sha256: Buffer;
  /** Below the directory of files. */
  path: string;
  sizeBytes: number;
  mediaType: FileMediaType;
  originalName: string;
  uploadedBy: number;
  uploadedAt: Date;
}

const columns = {
  id: 'files.id',
  publicId: 'files.public_id',
  organisationId: 'files.organisation_id',
  sha256: 'files.sha256',
  path: 'files.path',
  sizeBytes: 'files.size_bytes',
  mediaType: 'files.media_type',
  originalName: 'files.original_name',
  uploadedBy: 'files.uploaded_by',
  uploadedAt: 'files.uploaded_at',
} as const satisfies Record<keyof StoredFile, string>;

export async function insertFile(trx: Database, file: Omit<StoredFile, 'id'>): Promise<number> {
  const [id] = await trx('files').insert({
    public_id: file.publicId,
    organisation_id: file.organisationId,
    sha256: file.sha256,
    path: file.path,
    size_bytes: file.sizeBytes,
    media_type: file.mediaType,
    original_name: file.originalName,
    uploaded_by: file.uploadedBy,
    uploaded_at: file.uploadedAt,
  });
  return id as number;
}

export async function findFile(db: Database, publicId: string): Promise<StoredFile | undefined> {
  const [row] = await db('files').where({ public_id: publicId }).select<StoredFile[]>(columns);
  return row;
}

/** Of one organisation only: another's file id finds nothing. */
export async function listOwnFiles(
  db: Database,
  organisationId: number,
  publicIds: string[],
): Promise<StoredFile[]> {
  if (publicIds.length === 0) return [];
  return db('files')
    .where({ organisation_id: organisationId })
    .whereIn('public_id', publicIds)
    .select<StoredFile[]>(columns);
}

export interface Paper extends StoredFile {
  purpose: PaperPurpose;
}

export async function listRevisionPapers(db: Database, revisionId: number): Promise<Paper[]> {
  return db('revision_files')
    .join('files', 'files.id', 'revision_files.file_id')
    .where({ revision_id: revisionId })
    .orderBy('files.id')
    .select<Paper[]>({ ...columns, purpose: 'revision_files.purpose' });
}

export async function listKnownPaths(db: Database, paths: string[]): Promise<string[]> {
  if (paths.length === 0) return [];
  return db('files').whereIn('path', paths).pluck<string[]>('path');
}

/** Uploaded before `before` and named by no revision and no draft. */
export async function listUnusedFiles(db: Database, before: Date): Promise<StoredFile[]> {
  return db('files')
    .where('uploaded_at', '<', before)
    .whereNotExists(db('revision_files').select(db.raw('1')).whereRaw('revision_files.file_id = files.id'))
    .whereNotExists(
      db('application_drafts')
        .select(db.raw('1'))
        .whereRaw('LOCATE(files.public_id, application_drafts.answers) > 0'),
    )
    .select<StoredFile[]>(columns);
}

/** Of one organisation, and named by no revision. */
export async function measureUnusedUploads(
  db: Database,
  organisationId: number,
): Promise<{ count: number; bytes: number }> {
  const [row] = await db('files')
    .where({ organisation_id: organisationId })
    .whereNotExists(db('revision_files').select(db.raw('1')).whereRaw('revision_files.file_id = files.id'))
    .sum({ bytes: 'size_bytes' })
    .count<{ files: number; bytes: string | null }[]>({ files: '*' });
  return { count: Number(row?.files ?? 0), bytes: Number(row?.bytes ?? 0) };
}

export async function deleteFile(trx: Database, id: number): Promise<void> {
  await trx('files').where({ id }).delete();
}
