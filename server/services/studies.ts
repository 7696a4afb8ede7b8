import type { Database } from '../../db/connection.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
import { tieServices } from '../../shared/rules/service-ties.ts';
import { getModelPart, getRuleSetPart, listProjectParts } from '../../db/repositories/study-parts.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import {
  studyFormat,
  type ElementLists,
  type Feeder,
  type Project,
  type Study,
} from '../../shared/schemas/study.ts';

/** Of a run's frozen basis, what its study is made from. */
export interface StudyBasis {
  modelVersionId: number;
  /** In the order of their places in the queue. */
  aheadRevisionIds: number[];
  ownRevisionId: number;
  ruleSetVersionId: number;
}

type Model = Pick<Study, 'frequencyHz' | 'baseMva' | 'prefaultFactor' | 'minimumFaultOhm' | 'feeder'>;

async function readJson(db: Database, sha256: Buffer): Promise<unknown> {
  return JSON.parse((await getBlob(db, sha256)).toString('utf8')) as unknown;
}

/** Every list that a feeder and a project may both have, in the order in which they stand in the file. */
const listNames = [
  'sources',
  'lines',
  'transformers',
  'switches',
  'groundingBanks',
  'machines',
  'inverters',
  'loads',
  'devices',
  'capacitors',
] as const satisfies (keyof ElementLists)[];

type ListName = 'nodes' | (typeof listNames)[number];

const generators: readonly ListName[] = ['machines', 'inverters'];

/**
 * Fields whose value is the id of another element, with the lists it is of: elements of different kinds may share an id. What a
 * generator's `service` names is the feeder's in any case.
 */
const references = new Map<string, readonly ListName[]>([
  ['node', ['nodes']],
  ['from', ['nodes']],
  ['to', ['nodes']],
  ['branch', ['lines', 'transformers']],
  ['with', generators],
  ['unitMachine', generators],
]);

type Element = { id: string } & Record<string, unknown>;

/** Whether a project has an element with an id in one of some lists. */
function makeOwnership(project: Project): (lists: readonly ListName[], id: unknown) => boolean {
  const idsIn = (name: ListName) => new Set((project[name] ?? []).map((element) => element.id));
  const ids = new Map((['nodes', ...listNames] as const).map((name) => [name, idsIn(name)]));
  return (lists, id) => lists.some((name) => ids.get(name)!.has(id as string));
}

/** What the project brings gets its mark; a place on the feeder keeps its name, for it is not the project's. */
function markElement(element: Element, isOwn: ReturnType<typeof makeOwnership>, mark: string): Element {
  const entries = Object.entries(element).map(([key, value]) => {
    const isOwnName = key === 'id' || isOwn(references.get(key) ?? [], value);
    return [key, isOwnName ? `${mark}${value as string}` : value];
  });
  return Object.fromEntries(entries) as Element;
}

/** The feeder with one more project on it, all its elements under `q-<number>/`. */
function addAhead(feeder: Feeder, project: Project, number: number): Feeder {
  const mark = `q-${number}/`;
  const isOwn = makeOwnership(project);
  const marked = (elements: unknown) =>
    ((elements ?? []) as Element[]).map((element) => markElement(element, isOwn, mark));
  const joined = { ...feeder, nodes: [...feeder.nodes, ...marked(project.nodes)] };
  for (const name of listNames) {
    const added = marked(project[name]);
    if (added.length > 0) Object.assign(joined, { [name]: [...(feeder[name] ?? []), ...added] });
  }
  return joined as Feeder;
}

/** The known lists in their order, then whatever else the model carries in the order in which it carries it. */
function orderFeeder(feeder: Feeder): Feeder {
  const known = ['nodes', ...listNames, 'sections', 'circuits'].filter((name) => name in feeder);
  return { ...Object.fromEntries(known.map((name) => [name, feeder[name as keyof Feeder]])), ...feeder };
}

/** A model with everybody ahead on it. */
async function composeFeeder(db: Database, modelVersionId: number, aheadRevisionIds: number[]) {
  const modelPart = await getModelPart(db, modelVersionId);
  const model = (await readJson(db, modelPart.sha256)) as Model;
  let { feeder } = model;
  for (const part of await listProjectParts(db, aheadRevisionIds)) {
    const project = tieServices(feeder, (await readJson(db, part.sha256)) as Project);
    feeder = addAhead(feeder, project, part.applicationNumber);
  }
  return composeModel(`${modelPart.code}, version ${modelPart.number}`, model, feeder);
}

function composeModel(name: string, model: Model, feeder: Feeder): Study {
  return {
    format: studyFormat,
    name,
    frequencyHz: model.frequencyHz,
    baseMva: model.baseMva,
    prefaultFactor: model.prefaultFactor,
    ...(model.minimumFaultOhm === undefined ? {} : { minimumFaultOhm: model.minimumFaultOhm }),
    feeder: orderFeeder(feeder),
  };
}

/** The study file of a model and its queue, without a project. */
export async function composePlaceStudy(
  db: Database,
  modelVersionId: number,
  aheadRevisionIds: number[],
): Promise<{ bytes: Buffer }> {
  const study = await composeFeeder(db, modelVersionId, aheadRevisionIds);
  return { bytes: Buffer.from(JSON.stringify(study), 'utf8') };
}

/** The study file of a basis: from the same basis always the same bytes. */
export async function composeStudy(
  db: Database,
  basis: StudyBasis,
): Promise<{ bytes: Buffer; ruleSet: RuleSet }> {
  const [ownPart] = await listProjectParts(db, [basis.ownRevisionId]);
  const ground = await composeFeeder(db, basis.modelVersionId, basis.aheadRevisionIds);
  const project = tieServices(ground.feeder, (await readJson(db, ownPart!.sha256)) as Project);
  const study: Study = { ...ground, project };
  return {
    bytes: Buffer.from(JSON.stringify(study), 'utf8'),
    ruleSet: await getRuleSetPart(db, basis.ruleSetVersionId),
  };
}
