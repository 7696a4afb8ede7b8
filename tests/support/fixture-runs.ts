import { inTransaction, type Database } from '../../db/connection.ts';
import {
  insertApplication,
  lockApplicationById,
  takeApplicationNumber,
  updateApplication,
} from '../../db/repositories/applications.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { insertRevision } from '../../db/repositories/revisions.ts';
import type { Actor } from '../../server/context.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import { requestRun } from '../../server/services/run-requests.ts';
import type { Project } from '../../shared/schemas/study.ts';
import { solarAnswers } from './fixture-answers.ts';
import type { FixtureWorld } from './fixture-world.ts';

/** A synchronous machine behind its own transformer, on node n2 of the fixture feeder. */
export function machineProject(kva = 2500): Project {
  return {
    id: 'project',
    node: 'n2',
    nodes: [{ id: 'site', kv: 4.16, phases: 'ABC' }],
    transformers: [
      { id: 'step-up', from: 'n2', to: 'site', kva: 3000, connection: 'YNd1', impedancePercent: 6, xr: 10 },
    ],
    machines: [
      {
        id: 'machine',
        node: 'site',
        kind: 'synchronous',
        kva,
        xSubtransientPu: 0.16,
        x2Pu: 0.17,
        neutral: 'ungrounded',
      },
    ],
  };
}

export interface FixtureApplication {
  id: number;
  publicId: string;
  number: number;
  revisionId: number;
}

interface Wanted {
  by?: Actor;
  project?: Project;
  name?: string;
  at?: Date;
}

/** Handed in, with one revision; no route and no clock had a part in it. */
export async function insertFixtureApplication(
  db: Database,
  world: FixtureWorld,
  wanted: Wanted = {},
): Promise<FixtureApplication> {
  const by = wanted.by ?? world.people.applicant;
  const at = wanted.at ?? new Date('2026-03-02T15:00:00Z');
  const answers = solarAnswers();
  return inTransaction(db, async (trx) => {
    const publicId = newPublicId();
    const organisationId = by.organisationId as number;
    const id = await insertApplication(trx, { publicId, organisationId, createdBy: by.id, at });
    const number = await takeApplicationNumber(trx);
    const revisionId = await insertRevision(trx, {
      applicationId: id,
      answers,
      projectSha256: await insertBlob(trx, Buffer.from(JSON.stringify(wanted.project ?? machineProject()))),
      equipmentVersionIds: [],
      modelId: world.model.id,
      poiNode: 'n2',
      circuit: 'FX-1',
      attestedBy: by.name,
      attestedUserId: by.id,
      attestedAt: at,
    });
    await updateApplication(trx, id, {
      number,
      name: wanted.name ?? answers.project.name,
      modelId: world.model.id,
      revisionId,
      stage: 'submitted',
      waitingOn: 'utility',
    });
    return { id, publicId, number, revisionId };
  });
}

/** A preliminary run, in the queue of the database alone. */
export async function insertFixtureRun(
  db: Database,
  application: FixtureApplication,
  at = new Date(),
): Promise<{ id: number; publicId: string }> {
  return inTransaction(db, async (trx) => {
    const row = await lockApplicationById(trx, application.id);
    if (row === undefined) throw new Error(`No application has the row id ${application.id}`);
    return requestRun(trx, { now: at }, row, 'preliminary');
  });
}
