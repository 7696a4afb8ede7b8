import type { CompleteAnswers, PaperPurpose } from '../../shared/schemas/answers.ts';
import type { Database } from '../connection.ts';

/** What was handed in, as it was attested; never changed afterwards. */
export interface Revision {
  id: number;
  applicationId: number;
  number: number;
  answers: CompleteAnswers;
  projectSha256: Buffer;
  equipmentVersionIds: number[];
  modelId: number;
  poiNode: string;
  circuit: string | null;
  attestedBy: string;
  attestedUserId: number;
  attestedAt: Date;
}

interface RevisionRow extends Omit<Revision, 'answers' | 'equipmentVersionIds'> {
  answers: string;
  equipmentVersionIds: string;
}

const columns = {
  id: 'id',
  applicationId: 'application_id',
  number: 'number',
  answers: 'answers',
  projectSha256: 'project_sha256',
  equipmentVersionIds: 'equipment_version_ids',
  modelId: 'model_id',
  poiNode: 'poi_node',
  circuit: 'circuit',
  attestedBy: 'attested_by',
  attestedUserId: 'attested_user_id',
  attestedAt: 'attested_at',
} as const satisfies Record<keyof Revision, string>;

export async function findRevision(db: Database, id: number): Promise<Revision | undefined> {
  const [row] = await db('application_revisions').where({ id }).select<RevisionRow[]>(columns);
  return (
    row && {
      ...row,
      answers: JSON.parse(row.answers) as CompleteAnswers,
      equipmentVersionIds: JSON.parse(row.equipmentVersionIds) as number[],
    }
  );
}

export async function getRevision(db: Database, id: number): Promise<Revision> {
  const revision = await findRevision(db, id);
  if (revision === undefined) throw new Error(`No revision has the row id ${id}`);
  return revision;
}

export async function insertRevision(
  trx: Database,
  revision: Omit<Revision, 'id' | 'number'>,
): Promise<number> {
  const last = await trx('application_revisions')
    .where({ application_id: revision.applicationId })
    .max<{ number: number | null }[]>('number as number');
  const [id] = await trx('application_revisions').insert({
    application_id: revision.applicationId,
    number: (last[0]?.number ?? 0) + 1,
    answers: JSON.stringify(revision.answers),
    project_sha256: revision.projectSha256,
    equipment_version_ids: JSON.stringify(revision.equipmentVersionIds),
    model_id: revision.modelId,
    poi_node: revision.poiNode,
    circuit: revision.circuit,
    attested_by: revision.attestedBy,
    attested_user_id: revision.attestedUserId,
    attested_at: revision.attestedAt,
  });
  return id as number;
}

export async function insertRevisionFiles(
  trx: Database,
  revisionId: number,
  files: { fileId: number; purpose: PaperPurpose }[],
): Promise<void> {
  if (files.length === 0) return;
  await trx('revision_files').insert(
    files.map(({ fileId, purpose }) => ({ revision_id: revisionId, file_id: fileId, purpose })),
  );
}
