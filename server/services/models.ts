import type { Database } from '../../db/connection.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
import { listModelSummaries } from '../../db/repositories/model-summaries.ts';
import { getModelVersion } from '../../db/repositories/model-versions.ts';
import { findNetworkModel } from '../../db/repositories/network-models.ts';
import type { Device, Feeder } from '../../shared/schemas/study.ts';
import type { ModelDrawing, NetworkModelView } from '../../shared/schemas/territory.ts';
import type { Deps } from '../context.ts';
import { notFound } from '../errors.ts';

export async function listModels(deps: Deps): Promise<NetworkModelView[]> {
  const summaries = await listModelSummaries(deps.db);
  return summaries.map((summary) => ({ ...summary, publishedAt: summary.publishedAt.toISOString() }));
}

async function getFeeder(db: Database, versionId: number): Promise<Feeder> {
  const { modelSha256 } = await getModelVersion(db, versionId);
  const bytes = await getBlob(db, modelSha256);
  return (JSON.parse(bytes.toString('utf8')) as { feeder: Feeder }).feeder;
}

type Position = [lng: number, lat: number];

/** Nodes without a place cannot be drawn, and neither can what ends at them. */
function drawFeeder({ nodes, lines = [], transformers = [], devices = [] }: Feeder) {
  const placeOf = new Map(nodes.map((node) => [node.id, node.position]));
  const branchOf = new Map([...lines, ...transformers].map((branch) => [branch.id, branch]));
  const findPlace = (device: Device): Position | undefined => {
    const branch = branchOf.get(device.branch);
    return branch && placeOf.get(device.end === 'from' ? branch.from : branch.to);
  };
  return {
    lines: lines.flatMap(({ from, to, phases, circuit = '' }) => {
      const path = [placeOf.get(from), placeOf.get(to)].filter((place) => place !== undefined);
      return path.length === 2 ? [{ circuit, phases, path, to }] : [];
    }),
    devices: devices.flatMap((device) => {
      const place = findPlace(device);
      return place === undefined ? [] : [{ id: device.id, kind: device.kind, lng: place[0], lat: place[1] }];
    }),
  };
}

/** The published version of a model as it is drawn on the map. */
export async function getModelDrawing(deps: Deps, code: string): Promise<ModelDrawing> {
  const model = await findNetworkModel(deps.db, code);
  if (model === undefined || model.publishedVersionId === null) throw notFound('The network model');
  const feeder = await getFeeder(deps.db, model.publishedVersionId);
  const { substation: name, lat, lng } = model;
  return { code, ...drawFeeder(feeder), substation: { name, lat, lng } };
}
