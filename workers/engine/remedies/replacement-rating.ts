import type { ProjectStudy } from '../findings/make-screening.ts';
import type { Proposer } from './remedy-tests.ts';
import { findStandardRatings } from './standard-ratings.ts';

/** The smallest rating of the standard series with which the device that is outside keeps its margin. */
export const proposeReplacement: Proposer = ({ study, finding, holds }) => {
  const { feeder, project } = study;
  const device = [...(feeder.devices ?? []), ...(project.devices ?? [])].find(
    ({ id }) => id === finding.element,
  );
  if (!device || device.interruptingKa === undefined) return undefined;
  const known = findStandardRatings(device, findKv(study, device.branch, device.end));
  if (!known) return `No standard series is known for a ${device.kind} at this voltage.`;
  const larger = known.ratings.filter(({ ka }) => ka > device.interruptingKa!);
  for (const { ka, testXr } of larger) {
    const changes = [{ kind: 'device' as const, element: device.id, interruptingKa: ka, testXr }];
    if (!holds(changes)) continue;
    return {
      words: `Replace ${device.id} by a ${device.kind} that interrupts ${ka} kA.`,
      changes,
      figures: [
        { words: 'Interrupting rating', value: ka, unit: 'kA', source: known.source },
        { words: 'X/R of its test', value: testXr, unit: '', source: known.source },
      ],
    };
  }
  const largest = known.ratings.at(-1)!;
  return `The largest ${device.kind} of the standard series, ${largest.ka} kA, would still be outside.`;
};

function findKv({ feeder, project }: ProjectStudy, branchId: string, end: 'from' | 'to'): number {
  const lists = [feeder, project];
  const branches = lists.flatMap(({ lines = [], transformers = [] }) => [...lines, ...transformers]);
  const node = branches.find(({ id }) => id === branchId)![end];
  return lists.flatMap(({ nodes = [] }) => nodes).find(({ id }) => id === node)!.kv;
}
