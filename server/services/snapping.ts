import Flatbush from 'flatbush';
import { around, distance } from 'geoflatbush';
import type { Database } from '../../db/connection.ts';
import {
  listModelNodes,
  listPublishedModels,
  type ModelNode,
  type PublishedModel,
} from '../../db/repositories/model-nodes.ts';
import { findSetting } from '../../db/repositories/settings.ts';
import type { Pin } from '../../shared/schemas/territory.ts';

/** Further away than this a line of the project's own would be a project of its own. */
const usualReachMetres = 600;

interface NodeIndex {
  nodes: (ModelNode & { circuit: string })[];
  tree: Flatbush | undefined;
}

/** By database and version: a published version never changes. */
const indexes = new WeakMap<object, Map<number, NodeIndex>>();

function isOnFeeder(node: ModelNode): node is ModelNode & { circuit: string } {
  return node.circuit !== null;
}

async function buildIndex(db: Database, versionId: number): Promise<NodeIndex> {
  const nodes = (await listModelNodes(db, versionId)).filter(isOnFeeder);
  if (nodes.length === 0) return { nodes, tree: undefined };
  const tree = new Flatbush(nodes.length);
  for (const { lng, lat } of nodes) tree.add(lng, lat, lng, lat);
  tree.finish();
  return { nodes, tree };
}

async function getIndex(db: Database, versionId: number, published: ReadonlySet<number>): Promise<NodeIndex> {
  const known = indexes.get(db) ?? new Map<number, NodeIndex>();
  indexes.set(db, known);
  for (const old of known.keys()) if (!published.has(old)) known.delete(old);
  const index = known.get(versionId) ?? (await buildIndex(db, versionId));
  known.set(versionId, index);
  return index;
}

/** Everything about the nearest node that can take the project: for services, not for applicants. */
export interface SnappedNode {
  model: PublishedModel;
  node: ModelNode & { circuit: string };
  distanceMetres: number;
}

export interface Snap {
  found: SnappedNode | undefined;
  reachMetres: number;
}

function findNearest(index: NodeIndex, pin: Pin, reachMetres: number) {
  if (index.tree === undefined) return undefined;
  // A one-phase project can hang on any node, a three-phase one needs all three.
  const canTake = (at: number) => pin.phases === 'one' || index.nodes[at]?.phases === 'ABC';
  const [at] = around(index.tree, pin.lng, pin.lat, 1, reachMetres / 1000, canTake);
  const node = at === undefined ? undefined : index.nodes[at];
  return node && { node, distanceMetres: 1000 * distance(pin.lng, pin.lat, node.lng, node.lat) };
}

/** The nearest node, over all published models, that has the phases and lies within reach. */
export async function snapToNode(db: Database, pin: Pin): Promise<Snap> {
  const reachMetres = Number((await findSetting(db, 'snap.reach-metres')) ?? usualReachMetres);
  const models = await listPublishedModels(db);
  const published = new Set(models.map(({ versionId }) => versionId));
  let found: SnappedNode | undefined;
  for (const model of models) {
    const nearest = findNearest(await getIndex(db, model.versionId, published), pin, reachMetres);
    if (nearest === undefined) continue;
    if (found === undefined || nearest.distanceMetres < found.distanceMetres) found = { model, ...nearest };
  }
  return { found, reachMetres };
}
