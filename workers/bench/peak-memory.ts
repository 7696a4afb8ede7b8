import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { readStudy } from '../engine/read-study.ts';
import { runStudy } from '../engine/run-study.ts';
import { writeResult } from '../engine/write-result.ts';
import type { NetworkKind } from './networks.ts';
import { makeNetwork } from './networks.ts';

/**
 * Reads one study with its project from text, answers it and writes its result, in a process of its own, and gives the most
 * memory that took, in MB: what is measured many times over leaves garbage behind that no single run has.
 */
export function measurePeakMemory(kind: NetworkKind, count: number, scenarioCount: number): number {
  const read = readStudy(writeStudy(kind, count, scenarioCount));
  if ('problems' in read) throw new Error(`${kind} with ${count} nodes: got problems, expected none`);
  for (const _ of writeResult(runStudy(read.study, proFormaRuleSet)));
  // maxRSS is in KiB.
  return Math.round(process.resourceUsage().maxRSS / 1024);
}

/** Each scenario takes out one of the lines. */
function writeStudy(kind: NetworkKind, count: number, scenarioCount: number): string {
  const study = makeNetwork(kind, count);
  study.feeder.scenarios = Array.from({ length: scenarioCount }, (_, index) => ({
    id: `without ${index}`,
    out: [study.feeder.lines![Math.floor(((index + 1) * count) / (scenarioCount + 1))]!.id],
  }));
  return JSON.stringify(study);
}
