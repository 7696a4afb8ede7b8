import type { Stage } from '../../shared/rules/application-life.ts';
import type { Database } from '../connection.ts';

/** Handed in, and bound to no rules yet: what is published now may become theirs. */
export interface UnboundApplication {
  publicId: string;
  number: number | null;
  name: string;
  organisation: string;
  stage: Stage;
  /** Of the newest finished run; null while nothing has been computed. */
  runId: number | null;
  runBasis: string | null;
}

const unboundStages: readonly Stage[] = ['submitted', 'incomplete'];

export async function listUnboundApplications(db: Database): Promise<UnboundApplication[]> {
  const newestRun = db('runs')
    .whereRaw("runs.application_id = application.id AND runs.state = 'finished'")
    .max('runs.id');
  return db('applications as application')
    .join('organisations as organisation', 'organisation.id', 'application.organisation_id')
    .leftJoin('runs as run', 'run.id', newestRun as unknown as string)
    .whereIn('application.stage', unboundStages)
    .whereNull('application.rule_set_version_id')
    .orderBy('application.number')
    .select<UnboundApplication[]>({
      publicId: 'application.public_id',
      number: 'application.number',
      name: 'application.name',
      organisation: 'organisation.name',
      stage: 'application.stage',
      runId: 'run.id',
      runBasis: 'run.basis',
    });
}

/** Drafts are their organisation's own: only how many there are is told. */
export async function countDraftApplications(db: Database): Promise<number> {
  const [row] = await db('applications')
    .where({ stage: 'draft' satisfies Stage })
    .count<{ count: number }[]>({ count: '*' });
  return Number(row?.count ?? 0);
}
