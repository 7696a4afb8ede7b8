import { execFileSync } from 'node:child_process';
import { afterEach, expect, it } from 'vitest';
import { ComputeFault, openCompute, type Compute } from '../../server/compute.ts';
import { createLog } from '../../server/log.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';

import { computeStudy } from '../../workers/compute-study.ts';
import { makeFixtureModel } from '../support/fixture-feeder.ts';
import { machineProject } from '../support/fixture-runs.ts';

const log = createLog('silent', 'test');
let compute: Compute | undefined;
afterEach(() => compute?.close());

const study = Buffer.from(
  JSON.stringify({ format: 'feederwright.study/1', ...makeFixtureModel(), project: machineProject() }),
);

function open(limitSeconds = 60): Compute {
  compute = openCompute({ file: 'workers/compute.ts', limitSeconds, log });
  return compute;
}

/** Pids of this process's children that run the compute program. */
function listChildren(): number[] {
  const lines = execFileSync('ps', ['--ppid', String(process.pid), '-o', 'pid=,args='])
    .toString()
    .split('\n');
  return lines.filter((line) => line.includes('workers/compute.ts')).map((line) => Number.parseInt(line, 10));
}

it('gives the same bytes as the engine in this process, and passes its steps on', async () => {
  const steps: string[] = [];
  const answer = await open().study(study, proFormaRuleSet, (step) => steps.push(step.key));
  const here = computeStudy(study, proFormaRuleSet);
  if (answer.kind !== 'computed' || here.kind !== 'computed') throw new Error('expected two results');
  expect(Buffer.from(answer.resultBytes).equals(Buffer.from(here.resultBytes))).toBe(true);
  expect(answer.findings).toEqual(here.findings);
  expect(new Set(steps).size).toBeGreaterThanOrEqual(6);
});

it('answers two questions that are asked at once, one after the other', async () => {
  const { study: ask } = open();
  const [one, two] = await Promise.all([
    ask(study, proFormaRuleSet, () => undefined),
    ask(Buffer.from('{}'), proFormaRuleSet, () => undefined),
  ]);
  expect([one.kind, two.kind]).toEqual(['computed', 'refused']);
  expect(listChildren()).toHaveLength(1);
});

it('says what is wrong with a study, where and what was expected', async () => {
  const answer = await open().study(Buffer.from('{"format":"x"}'), proFormaRuleSet, () => undefined);
  expect(answer.kind).toBe('refused');
  expect(answer.kind === 'refused' && answer.problems.join('\n')).toMatch(/\/format: got "x", expected/);
});

it('calls it a fault when the child is killed in mid-computation, and starts another for the next', async () => {
  const { study: ask } = open();
  await ask(study, proFormaRuleSet, () => undefined);
  const [pid] = listChildren();
  process.kill(pid as number, 'SIGSTOP');
  const answer = ask(study, proFormaRuleSet, () => undefined);
  process.kill(pid as number, 'SIGKILL');
  await expect(answer).rejects.toThrow(ComputeFault);
  expect((await ask(study, proFormaRuleSet, () => undefined)).kind).toBe('computed');
  expect(listChildren()).not.toContain(pid);
});

it('ends a computation that takes longer than its limit, and starts another child for the next', async () => {
  const { study: ask } = open(8);
  await ask(study, proFormaRuleSet, () => undefined);
  const [pid] = listChildren();
  process.kill(pid as number, 'SIGSTOP');
  await expect(ask(study, proFormaRuleSet, () => undefined)).rejects.toThrow('longer than 8 s');
  expect((await ask(study, proFormaRuleSet, () => undefined)).kind).toBe('computed');
});
