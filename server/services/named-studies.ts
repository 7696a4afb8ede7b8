import { getBlob } from '../../db/repositories/blobs.ts';
import { getRuleSetPart } from '../../db/repositories/study-parts.ts';
import { findRun, type Run } from '../../db/repositories/runs.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type {
  Answer,
  ComputeKinds,
  NamedStudy,
  NotKept,
  Question,
  RefusedStudy,
} from '../compute-messages.ts';
import type { Deps } from '../context.ts';
import { conflict, notFound, refused } from '../errors.ts';
import type { StudyBasis } from './studies.ts';

/* Questions to the compute child about the study of a finished run. */

type KindAboutStudy = {
  [K in keyof ComputeKinds]: Question<K> extends NamedStudy ? K : never;
}[keyof ComputeKinds];

interface FinishedRun {
  run: Run;
  studySha256: Buffer;
  ruleSet: RuleSet;
}

/** The run with the rules that it was judged by; only what has a result can be asked about. */
export async function getFinishedRun(deps: Deps, publicId: string): Promise<FinishedRun> {
  const run = await findRun(deps.db, publicId);
  if (run === undefined) throw notFound('The run');
  if (run.state !== 'finished' || run.studySha256 === null) {
    throw conflict('run-unfinished', 'The run is not finished: there is nothing yet to try anything on');
  }
  const { ruleSetVersionId } = JSON.parse(run.basis) as StudyBasis;
  return { run, studySha256: run.studySha256, ruleSet: await getRuleSetPart(deps.db, ruleSetVersionId) };
}

/**
 * Asks without the study's bytes first: the child keeps the last few, and who tries one thing after another does not wait for
 * the database and the reading each time.
 */
export async function askAboutStudy<K extends KindAboutStudy>(
  deps: Deps,
  studySha256: Buffer,
  kind: K,
  question: Omit<Question<K>, keyof NamedStudy>,
): Promise<Exclude<Answer<K>, NotKept | RefusedStudy>> {
  const named = { ...question, studySha256: studySha256.toString('hex') } as Question<K>;
  let answer = await deps.compute.ask(kind, named);
  if (isKind(answer, 'not-kept')) {
    answer = await deps.compute.ask(kind, { ...named, studyBytes: await getBlob(deps.db, studySha256) });
  }
  if (isKind(answer, 'refused')) {
    const { problems } = answer as unknown as RefusedStudy;
    throw refused('study-refused', `The run's study is not accepted any more: ${problems.join('; ')}`);
  }
  return answer as Exclude<Answer<K>, NotKept | RefusedStudy>;
}

function isKind(answer: unknown, kind: string): boolean {
  return (answer as { kind?: string }).kind === kind;
}
