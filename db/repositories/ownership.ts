import type { Database } from '../connection.ts';

export interface ApplicationOwner {
  organisationId: number;
  stage: string;
}

export async function findApplicationOwner(
  db: Database,
  publicId: string,
): Promise<ApplicationOwner | undefined> {
  return db('applications')
    .where({ public_id: publicId })
    .first<ApplicationOwner | undefined>('organisation_id as organisationId', 'stage');
}

export async function findRunOwner(db: Database, publicId: string): Promise<ApplicationOwner | undefined> {
  return db('runs')
    .join('applications', 'applications.id', 'runs.application_id')
    .where('runs.public_id', publicId)
    .first<ApplicationOwner | undefined>(
      'applications.organisation_id as organisationId',
      'applications.stage',
    );
}

/** `isHandedIn`: some revision names it; until then only those who sent it know of it. */
export async function findFileOwner(
  db: Database,
  publicId: string,
): Promise<{ organisationId: number; isHandedIn: boolean } | undefined> {
  const row = await db('files')
    .leftJoin('revision_files', 'revision_files.file_id', 'files.id')
    .where({ public_id: publicId })
    .first<{ organisationId: number; revisionId: number | null } | undefined>({
      organisationId: 'files.organisation_id',
      revisionId: 'revision_files.revision_id',
    });
  return row && { organisationId: row.organisationId, isHandedIn: row.revisionId !== null };
}

export async function findReportOwner(
  db: Database,
  publicId: string,
): Promise<{ organisationId: number } | undefined> {
  return db('pre_application_reports')
    .where({ public_id: publicId })
    .first<{ organisationId: number } | undefined>('organisation_id as organisationId');
}
