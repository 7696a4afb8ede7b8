import { stages, type Stage, type WaitingOn } from '../../shared/rules/application-life.ts';
import type { WorklistSort } from '../../shared/schemas/applications.ts';
import type { GeneratorKind } from '../../shared/schemas/equipment.ts';
import type { Database } from '../connection.ts';

/** An application as lists show it. */
export interface WorklistRow {
  id: number;
  publicId: string;
  number: number | null;
  name: string;
  organisation: string;
  place: string | null;
  circuit: string | null;
  kind: GeneratorKind | null;
  sizeKw: number | null;
  stage: Stage;
  waitingOn: WaitingOn;
  reviewerPublicId: string | null;
  reviewerName: string | null;
  receivedOn: string | null;
  outsideCount: number | null;
  needsDataCount: number | null;
  updatedAt: Date;
}

export interface WorklistFilter {
  /** An applicant's: theirs only, drafts among them. Null is staff: everything that was handed in. */
  organisationId: number | null;
  stage?: Stage;
  /** A reviewer's row id, or null for what nobody has taken. */
  reviewerId?: number | null;
  isOutside?: boolean;
  /** Every word must be found somewhere; a number may be the one people quote. */
  words: string[];
}

function selectFrom(db: Database, filter: WorklistFilter) {
  const query = db('applications as application')
    .join('organisations as organisation', 'organisation.id', 'application.organisation_id')
    .leftJoin('users as reviewer', 'reviewer.id', 'application.reviewer_id');
  if (filter.organisationId === null) void query.whereNot('application.stage', 'draft');
  else void query.where('application.organisation_id', filter.organisationId);
  if (filter.stage !== undefined) void query.where('application.stage', filter.stage);
  if (filter.reviewerId !== undefined) void query.where('application.reviewer_id', filter.reviewerId);
  if (filter.isOutside !== undefined) {
    void query.where('application.outside_count', filter.isOutside ? '>' : '=', 0);
  }
  for (const word of filter.words) {
    const pattern = `%${word.replace(/[\\%_]/g, '\\$&')}%`;
    const [number] = /\d+$/.exec(word) ?? [];
    void query.where((any) => {
      for (const column of [
        'application.name',
        'application.place',
        'application.circuit',
        'organisation.name',
      ]) {
        void any.orWhere(column, 'like', pattern);
      }
      if (number !== undefined) void any.orWhere('application.number', Number(number));
    });
  }
  return query;
}

const columns = {
  id: 'application.id',
  publicId: 'application.public_id',
  number: 'application.number',
  name: 'application.name',
  organisation: 'organisation.name',
  place: 'application.place',
  circuit: 'application.circuit',
  kind: 'application.kind',
  sizeKw: 'application.size_kw',
  stage: 'application.stage',
  waitingOn: 'application.waiting_on',
  reviewerPublicId: 'reviewer.public_id',
  reviewerName: 'reviewer.name',
  receivedOn: 'application.received_on',
  outsideCount: 'application.outside_count',
  needsDataCount: 'application.needs_data_count',
  updatedAt: 'application.updated_at',
} as const satisfies Record<keyof WorklistRow, string>;

const sortColumns: Record<WorklistSort, string> = {
  number: 'application.number',
  name: 'application.name',
  stage: 'application.stage',
  size: 'application.size_kw',
  received: 'application.received_on',
  due: 'application.next_due_on',
  outside: 'application.outside_count',
};

interface WorklistOrder {
  sort: WorklistSort;
  direction: 'asc' | 'desc';
  limit: number;
  offset: number;
}

/** What has no value in the column comes last, whichever way it is sorted. */
export async function listWorklist(
  db: Database,
  filter: WorklistFilter,
  { sort, direction, limit, offset }: WorklistOrder,
): Promise<WorklistRow[]> {
  const column = sortColumns[sort];
  const query = selectFrom(db, filter).orderByRaw(`${column} IS NULL`);
  // Stages in the order of a life, not of the alphabet.
  if (sort === 'stage')
    void query.orderByRaw(`FIELD(${column}, ${stages.map(() => '?').join()}) ${direction}`, stages);
  else void query.orderBy(column, direction);
  return query.orderBy('application.id', 'desc').limit(limit).offset(offset).select<WorklistRow[]>(columns);
}

/** How many there are, and how many of them have a time limit behind them. */
export async function countWorklist(
  db: Database,
  filter: WorklistFilter,
  today: string,
): Promise<{ total: number; overdue: number }> {
  const [row] = await selectFrom(db, filter).select<{ total: number; overdue: number }[]>(
    db.raw('COUNT(*) AS total'),
    db.raw('COUNT(IF(application.next_due_on < ?, 1, NULL)) AS overdue', [today]),
  );
  return { total: row?.total ?? 0, overdue: row?.overdue ?? 0 };
}

/** One of them, whatever its stage. */
export async function getWorklistRow(db: Database, applicationId: number): Promise<WorklistRow> {
  const [row] = await db('applications as application')
    .join('organisations as organisation', 'organisation.id', 'application.organisation_id')
    .leftJoin('users as reviewer', 'reviewer.id', 'application.reviewer_id')
    .where('application.id', applicationId)
    .select<WorklistRow[]>(columns);
  if (row === undefined) throw new Error(`No application has the row id ${applicationId}`);
  return row;
}
