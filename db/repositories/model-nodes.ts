import type { Database } from '../connection.ts';

/** Where a node of a published version stands, for snapping. */
export interface ModelNode {
  nodeId: string;
  /** Null for what belongs to the substation and to no feeder. */
  circuit: string | null;
  kv: number;
  phases: string;
  distanceKm: number | null;
  lng: number;
  lat: number;
}

function selectNodes(db: Database) {
  return db('model_nodes').select<ModelNode[]>(
    'node_id as nodeId',
    'circuit',
    'kv',
    'phases',
    'distance_km as distanceKm',
    db.raw('ST_X(place) as lng'),
    db.raw('ST_Y(place) as lat'),
  );
}

export async function listModelNodes(db: Database, versionId: number): Promise<ModelNode[]> {
  return selectNodes(db).where({ version_id: versionId }).orderBy('node_id');
}

export async function findModelNode(
  db: Database,
  versionId: number,
  nodeId: string,
): Promise<ModelNode | undefined> {
  const [row] = await selectNodes(db).where({ version_id: versionId, node_id: nodeId });
  return row;
}

const rowsPerStatement = 500;

export async function insertModelNodes(trx: Database, versionId: number, nodes: ModelNode[]): Promise<void> {
  for (let start = 0; start < nodes.length; start += rowsPerStatement) {
    await trx('model_nodes').insert(
      nodes.slice(start, start + rowsPerStatement).map((node) => ({
        version_id: versionId,
        node_id: node.nodeId,
        circuit: node.circuit,
        kv: node.kv,
        phases: node.phases,
        distance_km: node.distanceKm,
        place: trx.raw('POINT(?, ?)', [node.lng, node.lat]),
      })),
    );
  }
}

export interface PublishedModel {
  versionId: number;
  versionNumber: number;
  publishedAt: Date;
  modelId: number;
  code: string;
  name: string;
  substation: string;
}

/** The version of each model that counts now. */
export async function listPublishedModels(db: Database): Promise<PublishedModel[]> {
  return db('network_models as model')
    .join('model_versions as version', 'version.id', 'model.published_version_id')
    .orderBy('model.code')
    .select<PublishedModel[]>({
      versionId: 'version.id',
      versionNumber: 'version.number',
      publishedAt: 'version.published_at',
      modelId: 'model.id',
      code: 'model.code',
      name: 'model.name',
      substation: 'model.substation',
    });
}
