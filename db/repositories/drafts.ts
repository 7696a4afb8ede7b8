import type { Answers } from '../../shared/schemas/answers.ts';
import type { Database } from '../connection.ts';

export interface Draft {
  applicationId: number;
  answers: Answers;
  /** Version of the application's row when the draft was last written. */
  version: number;
  updatedBy: number;
  updatedByName: string;
  updatedAt: Date;
}

interface DraftRow extends Omit<Draft, 'answers'> {
  answers: string;
}

export async function findDraft(db: Database, applicationId: number): Promise<Draft | undefined> {
  const [row] = await db('application_drafts as draft')
    .join('users', 'users.id', 'draft.updated_by')
    .where('draft.application_id', applicationId)
    .select<DraftRow[]>({
      applicationId: 'draft.application_id',
      answers: 'draft.answers',
      version: 'draft.version',
      updatedBy: 'draft.updated_by',
      updatedByName: 'users.name',
      updatedAt: 'draft.updated_at',
    });
  return row && { ...row, answers: JSON.parse(row.answers) as Answers };
}

export async function saveDraft(trx: Database, draft: Omit<Draft, 'updatedByName'>): Promise<void> {
  const row = {
    answers: JSON.stringify(draft.answers),
    version: draft.version,
    updated_by: draft.updatedBy,
    updated_at: draft.updatedAt,
  };
  await trx('application_drafts')
    .insert({ application_id: draft.applicationId, ...row })
    .onConflict('application_id')
    .merge(row);
}

export async function deleteDraft(trx: Database, applicationId: number): Promise<void> {
  await trx('application_drafts').where({ application_id: applicationId }).delete();
}
