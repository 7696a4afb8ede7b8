import type { QuestionId } from '../../../shared/schemas/findings.ts';
import { listFedCases } from './fed-cases.ts';
import { listIslands } from './islands.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { Screening } from './screening.ts';
import type { Upstream } from './upstream.ts';

/* Operating cases that leave no island to look at: what was measured in the others does not speak for them. */

/** Answers a question about islands where there is none to ask about in any operating case; nothing where there are islands. */
export function answerWithoutIslands(screening: Screening, id: QuestionId): Answered | undefined {
  const cases = listIslands(screening);
  if (cases.some(({ islands }) => islands.length > 0)) return undefined;
  const [bypassed] = cases.flatMap((each) => each.bypassed);
  if (bypassed) {
    const note = describeWayRound(bypassed.id);
    return { ...answer(screening, id, 'needs-data', { element: bypassed.id, note }), consequence: 'study' };
  }
  if (countSources(screening.upstream) > 1) {
    return { ...answer(screening, id, 'needs-data', { note: severalSourcesNote }), consequence: 'study' };
  }
  return answer(screening, id, 'needs-data', { note: noDeviceNote });
}

/**
 * Joins answers about islands with a finding for the operating cases in which there is a way round every device, which takes
 * a study whatever the rule says of missing data, and with one for those in which no device is known that opens. Where a
 * device would have two, what is outside stays, and what is within goes.
 */
export function joinGaps(screening: Screening, id: QuestionId, answers: readonly Answered[]): Answered[] {
  const gaps = listGaps(screening, id);
  if (gaps.length === 0) return [...answers];
  const isOpen = ({ verdict }: Answered) => verdict === 'outside' || verdict === 'needs-data';
  const open = new Set(answers.filter(isOpen).map(({ element }) => element));
  const added = gaps.filter(({ element }) => !open.has(element));
  const covered = new Set(added.map(({ element }) => element));
  return [...answers.filter((each) => isOpen(each) || !covered.has(each.element)), ...added];
}

function listGaps(screening: Screening, id: QuestionId): Answered[] {
  const fed = new Set(listFedCases(screening));
  const gaps = new Map<string | undefined, Answered>();
  for (const { operating, islands, bypassed } of listIslands(screening)) {
    if (islands.length > 0 || !fed.has(operating)) continue;
    const element = bypassed[0]?.id;
    if (gaps.has(element)) continue;
    const { name } = operating;
    const when = name === undefined ? 'as the model stands' : `in operating case ${JSON.stringify(name)}`;
    const say = (note: string) =>
      answer(screening, id, 'needs-data', { element, note: `${note} So it is ${when}.` });
    if (element !== undefined) gaps.set(element, { ...say(describeWayRound(element)), consequence: 'study' });
    else if (countSources(operating.upstream) > 1)
      gaps.set(element, { ...say(severalSourcesNote), consequence: 'study' });
    else gaps.set(element, say(noDeviceNote));
  }
  return [...gaps.values()];
}

/** How many nodes with a source the way's first node is joined to. */
function countSources({ graph, isSource, path }: Upstream): number {
  const seen = new Uint8Array(isSource.length);
  const queue = [path[0]!];
  seen[path[0]!] = 1;
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (seen[v]) continue;
      seen[v] = 1;
      queue.push(v);
    }
  }
  return queue.filter((node) => isSource[node]).length;
}

const severalSourcesNote =
  'More than one source feeds this place; what several openings leave is for a study.';

const noDeviceNote =
  'No breaker or sectionalising device is known that would cut this place off from its source.';

function describeWayRound(device: string): string {
  return `Opening ${device} alone leaves this place another way to a source; what several openings leave is for a study.`;
}
