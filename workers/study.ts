import { createHash } from 'node:crypto';
import { listNotFinite } from './engine/finite-result.ts';
import { escapeText, listProblems } from './engine/problems.ts';
import { checkStudy, parseJson } from './engine/read-study.ts';
import { runStudy, workStudy } from './engine/run-study.ts';
import { writeResult } from './engine/write-result.ts';
import { InputError, loadRuleSet, orThrow, readArguments, readInput } from './study-input.ts';
import { writeTo } from './study-output.ts';
import { checkSheetFile, writeSheetFile } from './study-sheet.ts';
import { decodeText } from './study-text.ts';

/* The command line of the engine: a study file in, its result on standard output. */

async function main(): Promise<void> {
  const { file, timing, rules, sheet } = readArguments();
  if (sheet) checkSheetFile(sheet);
  const ruleSet = await loadRuleSet(rules);
  const { study, parseMs, checkMs, sha256 } = readTimed(await readInput(file), sheet !== undefined);
  const lap = startWatch();
  // Without a sheet what led to the result is let go at once.
  const { result, worked } = sheet
    ? workStudy(study, ruleSet)
    : { result: runStudy(study, ruleSet), worked: undefined };
  const notFinite = listNotFinite(result);
  if (notFinite.length > 0) throw new InputError(listProblems(notFinite).join('\n'));
  const solveMs = lap();
  if (sheet) await writeSheetFile(sheet, { result, worked }, sha256);
  await writeTo(process.stdout, writeResult(result));
  const writeMs = lap();
  if (!timing) return;
  const nodes = study.feeder.nodes.length;
  await writeTo(process.stderr, [`${JSON.stringify({ nodes, parseMs, checkMs, solveMs, writeMs })}\n`]);
}

/** On its own, so that bytes and text are out of memory when the study is solved. */
function readTimed(bytes: Uint8Array, isHashed: boolean) {
  const sha256 = isHashed ? createHash('sha256').update(bytes).digest('hex') : '';
  const lap = startWatch();
  const { value } = orThrow(parseJson(orThrow(decodeText(bytes)).text));
  const parseMs = lap();
  const { study } = orThrow(checkStudy(value));
  return { study, parseMs, checkMs: lap(), sha256 };
}

/** Gives a function that tells the milliseconds since it was made or last called. */
function startWatch(): () => number {
  let last = performance.now();
  return () => {
    const before = last;
    last = performance.now();
    return last - before;
  };
}

/** Gives the exit code: 2 for what the caller can put right, 1 for a fault of the program or its surroundings. */
async function reportFailure(error: unknown): Promise<number> {
  const isInput = error instanceof InputError;
  const line = isInput ? error.message : `No result: ${escapeText(String(error))}`;
  await writeTo(process.stderr, [`${line}\n`]);
  return isInput ? 2 : 1;
}

try {
  await main();
} catch (error) {
  process.exitCode = await reportFailure(error);
}
