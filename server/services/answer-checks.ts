import type { Database } from '../../db/connection.ts';
import { listEquipmentVersions, type EquipmentVersion } from '../../db/repositories/equipment.ts';
import { listOwnFiles, type StoredFile } from '../../db/repositories/files.ts';
import { listConnectionProblems, listEquipmentProblems } from '../../shared/rules/project-checks.ts';
import type { PointOfInterconnection } from '../../shared/rules/project-electrical.ts';
import {
  answerSections,
  sectionSchemas,
  type Answers,
  type AnswerSection,
  type PapersAnswers,
} from '../../shared/schemas/answers.ts';
import type { FieldProblem } from '../../shared/schemas/problems.ts';
import { listProblems } from '../validate.ts';
import { snapToNode, type Snap, type SnappedNode } from './snapping.ts';

/** Answers with all that they name looked up, and everything that is wrong with them. */
export interface CheckedAnswers {
  /** Paths begin with the section: `connection.transformer.rating.nameplate.kva`. */
  problems: FieldProblem[];
  /** Released versions of the records that the answers name, by public id. */
  records: Map<string, EquipmentVersion>;
  /** The organisation's own files that the answers name. */
  files: StoredFile[];
  snapped: SnappedNode | undefined;
}

export function toPoint({ node }: SnappedNode): PointOfInterconnection {
  return { node: node.nodeId, kv: node.kv, phases: node.phases };
}

function under(section: AnswerSection, problems: FieldProblem[]): FieldProblem[] {
  return problems.map(({ path, message }) => ({ path: `${section}.${path}`, message }));
}

async function findRecords(
  db: Database,
  { equipment, connection }: Answers,
): Promise<CheckedAnswers['records']> {
  const named = [
    ...(equipment?.units ?? []),
    ...(connection?.transformer ? [connection.transformer.rating] : []),
  ];
  const ids = named.flatMap((choice) => (choice.source === 'record' ? [choice.equipmentId] : []));
  const versions = await listEquipmentVersions(db, [...new Set(ids)]);
  const released = versions.filter(({ state }) => state === 'released');
  return new Map(released.map((version) => [version.publicId, version]));
}

function checkSite({ found, reachMetres }: Snap, phases: 'ABC' | 'one'): FieldProblem[] {
  if (found !== undefined) return [];
  const feeder = phases === 'ABC' ? 'No three-phase feeder' : 'No feeder';
  const message = `${feeder} is within ${reachMetres} metres of this place: move the pin`;
  return [{ path: 'lat', message }];
}

function checkPapers(papers: PapersAnswers, files: StoredFile[]): FieldProblem[] {
  const own = new Set(files.map(({ publicId }) => publicId));
  const seen = new Set<string>();
  return papers.files.flatMap(({ fileId }, index) => {
    const path = `files.${index}.fileId`;
    if (!own.has(fileId)) return [{ path, message: 'That file is not one of yours' }];
    if (seen.has(fileId)) return [{ path, message: 'That file is attached already' }];
    seen.add(fileId);
    return [];
  });
}

function listShapeProblems(answers: Answers): FieldProblem[] {
  return answerSections.flatMap((section) =>
    answers[section] === undefined ? [] : listProblems(sectionSchemas[section], answers[section], section),
  );
}

function listCrossProblems(
  { equipment, connection, papers }: Answers,
  { records, files, snapped }: Omit<CheckedAnswers, 'problems'>,
): FieldProblem[] {
  const problems: FieldProblem[] = [];
  if (equipment !== undefined) {
    problems.push(...under('equipment', listEquipmentProblems({ equipment, records })));
  }
  if (connection !== undefined) {
    const electrical = { equipment: equipment ?? { units: [] }, connection, records };
    problems.push(...under('connection', listConnectionProblems(electrical, snapped && toPoint(snapped))));
  }
  return papers === undefined ? problems : [...problems, ...under('papers', checkPapers(papers, files))];
}

/** Until the connection says otherwise any node will do. */
async function snapSite(db: Database, { site, connection }: Answers) {
  if (site === undefined) return { snapped: undefined, problems: [] };
  const phases = connection?.phases ?? 'one';
  const snap = await snapToNode(db, { lat: site.lat, lng: site.lng, phases });
  return { snapped: snap.found, problems: under('site', checkSite(snap, phases)) };
}

/** Shapes first; what reaches across sections only where every shape is right. Sections that are missing say nothing. */
export async function checkAnswers(
  db: Database,
  organisationId: number,
  answers: Answers,
): Promise<CheckedAnswers> {
  const shapes = listShapeProblems(answers);
  if (shapes.length > 0) return { problems: shapes, records: new Map(), files: [], snapped: undefined };
  const fileIds = (answers.papers?.files ?? []).map(({ fileId }) => fileId);
  const { snapped, problems } = await snapSite(db, answers);
  const found = {
    records: await findRecords(db, answers),
    files: await listOwnFiles(db, organisationId, fileIds),
    snapped,
  };
  return { ...found, problems: [...problems, ...listCrossProblems(answers, found)] };
}

/** Of one section, with paths inside it. */
export function pickProblems(problems: FieldProblem[], section: AnswerSection): FieldProblem[] {
  const prefix = `${section}.`;
  return problems
    .filter(({ path }) => path.startsWith(prefix))
    .map(({ path, message }) => ({ path: path.slice(prefix.length), message }));
}
