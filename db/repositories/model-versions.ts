import type { Database } from '../connection.ts';

type ModelVersionState = 'draft' | 'published' | 'retired';

interface ModelVersion {
  id: number;
  modelId: number;
  number: number;
  state: ModelVersionState;
  modelSha256: Buffer;
  /** Row ids of the applications that this version already contains: they no longer count as ahead. */
  absorbs: number[];
  publishedAt: Date | null;
}

interface ModelVersionRow extends Omit<ModelVersion, 'absorbs'> {
  absorbs: string;
}

export async function getModelVersion(db: Database, id: number): Promise<ModelVersion> {
  const row = await db('model_versions').where({ id }).first<ModelVersionRow | undefined>({
    id: 'id',
    modelId: 'model_id',
    number: 'number',
    state: 'state',
    modelSha256: 'model_sha256',
    absorbs: 'absorbs',
    publishedAt: 'published_at',
  });
  if (row === undefined) throw new Error(`No model version has the row id ${id}`);
  return { ...row, absorbs: JSON.parse(row.absorbs) as number[] };
}

interface NewModelVersion {
  modelId: number;
  number: number;
  modelSha256: Buffer;
  absorbs: number[];
  publishedBy: number | null;
  publishedAt: Date;
}

/** A version that is published as it is written; the one before it is retired. */
export async function insertPublishedVersion(trx: Database, version: NewModelVersion): Promise<number> {
  const { modelId } = version;
  await trx('model_versions').where({ model_id: modelId, state: 'published' }).update({ state: 'retired' });
  const [id] = await trx('model_versions').insert({
    model_id: modelId,
    number: version.number,
    state: 'published' satisfies ModelVersionState,
    model_sha256: version.modelSha256,
    absorbs: JSON.stringify(version.absorbs),
    published_by: version.publishedBy,
    published_at: version.publishedAt,
  });
  await trx('network_models')
    .where({ id: modelId })
    .update({ published_version_id: id, version: trx.raw('version + 1') });
  return id as number;
}
