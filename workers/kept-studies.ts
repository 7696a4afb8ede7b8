import type { NamedStudy, NotKept, RefusedStudy } from '../server/compute-messages.ts';
import type { ProjectStudy } from './engine/findings/make-screening.ts';
import { listProblems } from './engine/problems.ts';
import { readStudy } from './engine/read-study.ts';
import { decodeText } from './study-text.ts';

/* The last few studies, read and checked: who tries one thing after another waits for the reading once. */

/** A study in memory takes several times its bytes in the file. */
const mostStudies = 4;
const mostBytes = 64 * 1024 * 1024;

const kept = new Map<string, { study: ProjectStudy; byteCount: number }>();

/** The one used longest ago goes first; the newest stays, however large. */
function keep(sha256: string, study: ProjectStudy, byteCount: number): void {
  kept.delete(sha256);
  kept.set(sha256, { study, byteCount });
  const total = () => [...kept.values()].reduce((sum, each) => sum + each.byteCount, 0);
  while (kept.size > 1 && (kept.size > mostStudies || total() > mostBytes)) {
    kept.delete(kept.keys().next().value!);
  }
}

/** Gives the study that is named, from its bytes where they are there. */
export function getNamedStudy({
  studySha256,
  studyBytes,
}: NamedStudy): { kind: 'study'; study: ProjectStudy } | RefusedStudy | NotKept {
  const known = kept.get(studySha256);
  if (known !== undefined) {
    keep(studySha256, known.study, known.byteCount);
    return { kind: 'study', study: known.study };
  }
  if (studyBytes === undefined) return { kind: 'not-kept' };
  const decoded = decodeText(studyBytes);
  const read = 'problems' in decoded ? decoded : readStudy(decoded.text);
  if ('problems' in read) return { kind: 'refused', problems: listProblems(read.problems) };
  const { study } = read;
  if (study.project === undefined) {
    return { kind: 'refused', problems: ['/project: got nothing, expected a project'] };
  }
  keep(studySha256, study as ProjectStudy, studyBytes.length);
  return { kind: 'study', study: study as ProjectStudy };
}
