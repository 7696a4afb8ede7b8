import { createHash } from 'node:crypto';
import { resolve } from 'node:path';
import type { Logger } from 'pino';
import { openCompute } from '../../server/compute.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { makeMachineProject } from '../engine/room/plants.ts';
import { makeLoadedNetwork } from './room.ts';

const trials = 40;

/**
 * Times trials as the server asks them, through a compute child: the first with the study's bytes, then others of which each changes
 * something else, while the child keeps the study. Milliseconds of the wall clock, on whatever else the machine does.
 */
export async function measureTrial(nodes: number) {
  const study = makeLoadedNetwork(nodes);
  const project = makeMachineProject(`n${nodes - 1}`, 12.47, 1500);
  const studyBytes = Buffer.from(JSON.stringify({ ...study, project }));
  const studySha256 = createHash('sha256').update(studyBytes).digest('hex');
  const log = { warn: () => undefined, error: () => undefined } as unknown as Logger;
  const compute = openCompute({ file: resolve('workers/compute.ts'), limitSeconds: 120, log });
  const ask = async (factor: number, bytes?: Uint8Array) => {
    const began = performance.now();
    const answer = await compute.ask('trial', {
      ...{ studySha256, ruleSet: proFormaRuleSet, changes: [{ kind: 'size' as const, factor }] },
      ...(bytes && { studyBytes: bytes }),
    });
    if (answer.kind !== 'tried') throw new Error(`got ${answer.kind}, expected findings`);
    return { milliseconds: performance.now() - began, findings: answer.findings.length };
  };
  try {
    // The child starts with this one.
    const first = await ask(1, studyBytes);
    const times: number[] = [];
    for (let index = 0; index < trials; index++)
      times.push((await ask(0.5 + index / (2 * trials))).milliseconds);
    times.sort((p, q) => p - q);
    const rounded = (milliseconds: number) => Math.round(milliseconds * 10) / 10;
    return {
      ...{ nodes, findings: first.findings, trials },
      startAndFirstMs: rounded(first.milliseconds),
      medianMs: rounded(times[Math.floor(trials / 2)]!),
      worstMs: rounded(times.at(-1)!),
    };
  } finally {
    compute.close();
  }
}
