import type { Database, Transaction } from '../connection.ts';

export interface NetworkModel {
  id: number;
  code: string;
  name: string;
  substation: string;
  lng: number;
  lat: number;
  publishedVersionId: number | null;
  nextPosition: number;
  version: number;
}

function selectModels(db: Database) {
  return db('network_models').select<NetworkModel[]>(
    'id',
    'code',
    'name',
    'substation',
    db.raw('ST_X(place) as lng'),
    db.raw('ST_Y(place) as lat'),
    'published_version_id as publishedVersionId',
    'next_position as nextPosition',
    'version',
  );
}

export async function findNetworkModel(db: Database, code: string): Promise<NetworkModel | undefined> {
  const [row] = await selectModels(db).where({ code });
  return row;
}

export async function findNetworkModelById(db: Database, id: number): Promise<NetworkModel | undefined> {
  const [row] = await selectModels(db).where({ id });
  return row;
}

/** The first lock of every transaction that reads or changes a model's queue or publication. */
export async function lockNetworkModel(trx: Transaction, id: number): Promise<NetworkModel> {
  const [row] = await selectModels(trx).where({ id }).forUpdate();
  if (row === undefined) throw new Error(`No network model has the row id ${id}`);
  return row;
}

interface NewNetworkModel {
  code: string;
  name: string;
  substation: string;
  lng: number;
  lat: number;
}

export async function insertNetworkModel(trx: Database, model: NewNetworkModel): Promise<number> {
  const [id] = await trx('network_models').insert({
    code: model.code,
    name: model.name,
    substation: model.substation,
    place: trx.raw('POINT(?, ?)', [model.lng, model.lat]),
  });
  return id as number;
}

/** Gives the position and moves the counter on; the caller holds the model's lock. */
export async function takeQueuePosition(trx: Transaction, model: NetworkModel): Promise<number> {
  await trx('network_models').where({ id: model.id }).increment('next_position', 1);
  return model.nextPosition;
}
