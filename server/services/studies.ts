import type { Database } from '../../db/connection.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
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
] as const satisfies (keyof ElementLists)[];

/** Fields whose value is the id of another element. */
const references = new Set(['node', 'from', 'to', 'branch', 'with']);

type Element = { id: string } & Record<string, unknown>;

function listElements(project: Project): Element[] {
  const lists = [project.nodes ?? [], ...listNames.map((name) => project[name] ?? [])];
  return lists.flat() as unknown as Element[];
}

/** What the project brings gets its mark; a place on the feeder keeps its name, for it is not the project's. */
function markElement(element: Element, own: ReadonlySet<string>, mark: string): Element {
  const entries = Object.entries(element).map(([key, value]) => {
    const isOwnName = key === 'id' || (references.has(key) && own.has(value as string));
    return [key, isOwnName ? `${mark}${value as string}` : value];
  });
  return Object.fromEntries(entries) as Element;
}

/** The feeder with one more project on it, all its elements under `q-<number>/`. */
function addAhead(feeder: Feeder, project: Project, number: number): Feeder {
  const mark = `q-${number}/`;
  const own = new Set(listElements(project).map((element) => element.id));
  const marked = (elements: unknown) =>
    ((elements ?? []) as Element[]).map((element) => markElement(element, own, mark));
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

/** The study file of a basis: from the same basis always the same bytes. */
export async function composeStudy(
  db: Database,
  basis: StudyBasis,
): Promise<{ bytes: Buffer; ruleSet: RuleSet }> {
  const modelPart = await getModelPart(db, basis.modelVersionId);
  const model = (await readJson(db, modelPart.sha256)) as Model;
  let { feeder } = model;
  for (const part of await listProjectParts(db, basis.aheadRevisionIds)) {
    feeder = addAhead(feeder, (await readJson(db, part.sha256)) as Project, part.applicationNumber);
  }
  const [ownPart] = await listProjectParts(db, [basis.ownRevisionId]);
  const study: Study = {
    format: studyFormat,
    name: `${modelPart.code}, version ${modelPart.number}`,
    frequencyHz: model.frequencyHz,
    baseMva: model.baseMva,
    prefaultFactor: model.prefaultFactor,
    ...(model.minimumFaultOhm === undefined ? {} : { minimumFaultOhm: model.minimumFaultOhm }),
    feeder: orderFeeder(feeder),
    project: (await readJson(db, ownPart!.sha256)) as Project,
  };
  return {
    bytes: Buffer.from(JSON.stringify(study), 'utf8'),
    ruleSet: await getRuleSetPart(db, basis.ruleSetVersionId),
  };
}
