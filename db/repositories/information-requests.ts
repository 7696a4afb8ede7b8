import type { AnswerSection } from '../../shared/schemas/answers.ts';
import type { Database, Transaction } from '../connection.ts';

export interface InformationRequest {
  id: number;
  items: { section: AnswerSection; text: string }[];
  askedBy: string;
  askedAt: Date;
  answeredAt: Date | null;
}

export interface NewInformationRequest {
  applicationId: number;
  items: InformationRequest['items'];
  askedBy: number;
  askedAt: Date;
}

export async function insertInformationRequest(
  trx: Transaction,
  request: NewInformationRequest,
): Promise<void> {
  await trx('information_requests').insert({
    application_id: request.applicationId,
    items: JSON.stringify(request.items),
    asked_by: request.askedBy,
    asked_at: request.askedAt,
  });
}

/** Whatever was still asked of this application is answered by what it hands in now. */
export async function answerInformationRequests(
  trx: Transaction,
  applicationId: number,
  answeredAt: Date,
): Promise<void> {
  await trx('information_requests')
    .where({ application_id: applicationId })
    .whereNull('answered_at')
    .update({ answered_at: answeredAt });
}

/** The newest first. */
export async function listInformationRequests(
  db: Database,
  applicationId: number,
): Promise<InformationRequest[]> {
  const rows = await db('information_requests')
    .join('users', 'users.id', 'information_requests.asked_by')
    .where({ application_id: applicationId })
    .orderBy('information_requests.id', 'desc')
    .select<(Omit<InformationRequest, 'items'> & { items: string })[]>({
      id: 'information_requests.id',
      items: 'items',
      askedBy: 'users.name',
      askedAt: 'asked_at',
      answeredAt: 'answered_at',
    });
  return rows.map((row) => ({ ...row, items: JSON.parse(row.items) as InformationRequest['items'] }));
}
