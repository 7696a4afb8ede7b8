import { randomBytes } from 'node:crypto';
import { inTransaction, type Database } from '../../db/connection.ts';
import {
  insertApplication,
  lockApplication,
  takeApplicationNumber,
  type Application,
} from '../../db/repositories/applications.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { insertRevision } from '../../db/repositories/revisions.ts';
import { claimRun, finishTurn, insertFindings } from '../../db/repositories/run-turns.ts';
import type { Actor, SignedInContext } from '../../server/context.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import { requestRun } from '../../server/services/run-requests.ts';
import { moveApplication } from '../../server/services/transitions.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type { Finding, QuestionId } from '../../shared/schemas/findings.ts';
import { listAsked, type RuleSet } from '../../shared/schemas/rule-sets.ts';
import { solarAnswers } from './fixture-answers.ts';
import type { FixtureWorld } from './fixture-world.ts';

export function makeContext(actor: Actor, now: Date): SignedInContext {
  return { actor, now, ip: '127.0.0.1', requestId: 'fixture' };
}

/** Every question answered within its limit, but for what is said otherwise. */
export function makeFindings(others: Partial<Finding>[] = []): Finding[] {
  const { rules }: RuleSet = proFormaRuleSet;
  return listAsked(proFormaRuleSet).map(({ id, question }) => {
    const { limits, unit, source } = rules[id as QuestionId]!;
    const [{ limit, comparison }] = limits;
    const value = limit === null ? null : comparison === '>=' ? limit * 10 : limit / 2;
    const within: Finding = {
      id,
      question,
      verdict: 'within',
      value,
      comparison,
      limit,
      unit,
      consequence: 'none',
      source,
    };
    return { ...within, ...others.find((other) => other.id === id) };
  });
}

/** A project handed in at `at`, with its preliminary run waiting: as a submission leaves it, without its form. */
export async function handIn(
  db: Database,
  world: FixtureWorld,
  at: Date,
  applicant: Actor = world.people.applicant,
): Promise<{ publicId: string; preliminaryRunId: number }> {
  const publicId = newPublicId();
  const answers = solarAnswers();
  const context = makeContext(applicant, at);
  return inTransaction(db, async (trx) => {
    const organisationId = applicant.organisationId!;
    await insertApplication(trx, { publicId, organisationId, createdBy: applicant.id, at });
    const draft = (await lockApplication(trx, publicId))!;
    const project = { id: 'project', node: 'n2', nodes: [], inverters: [] };
    const revisionId = await insertRevision(trx, {
      applicationId: draft.id,
      answers,
      projectSha256: await insertBlob(trx, Buffer.from(JSON.stringify(project))),
      equipmentVersionIds: [],
      modelId: world.model.id,
      poiNode: 'n2',
      circuit: 'FX-1',
      attestedBy: applicant.name,
      attestedUserId: applicant.id,
      attestedAt: at,
    });
    const moved = await moveApplication(trx, context, draft, 'submit', null, {
      number: await takeApplicationNumber(trx),
      name: answers.project.name,
      kind: 'pv-inverter',
      sizeKw: 1000,
      exportKw: 1000,
      modelId: world.model.id,
      circuit: 'FX-1',
      revisionId,
      receivedOn: localDate(at, 'America/New_York'),
    });
    const run = await requestRun(trx, context, moved, 'preliminary');
    return { publicId, preliminaryRunId: run.id };
  });
}

/** Takes the run's turn and stores what a worker would have stored. */
export async function finishRun(
  db: Database,
  runId: number,
  findings: Finding[],
  at: Date,
  files: { study: Buffer; result: Buffer } = {
    study: Buffer.from('{"study":1}'),
    result: Buffer.from('{"result":1}'),
  },
): Promise<void> {
  await inTransaction(db, async (trx) => {
    const token = randomBytes(16);
    const turn = (await claimRun(trx, {
      runId,
      token,
      now: at,
      leaseUntil: new Date(at.getTime() + 60_000),
    }))!;
    await insertFindings(trx, runId, findings);
    await finishTurn(trx, turn, {
      studySha256: await insertBlob(trx, files.study),
      resultSha256: await insertBlob(trx, files.result),
      summary: null,
      warnings: ['a warning for the utility'],
      steps: [{ key: 'findings', label: 'Answering the questions', percent: 90, at: at.toISOString() }],
      now: at,
    });
  });
}

export async function getRow(db: Database, publicId: string): Promise<Application> {
  return inTransaction(db, async (trx) => (await lockApplication(trx, publicId))!);
}
