import { randomBytes } from 'node:crypto';
import { isContentError } from '../../db/connection.ts';
import { claimRun, findEqualResult, releaseTurn, type RunTurn } from '../../db/repositories/run-turns.ts';
import { composeStudy, type StudyBasis } from '../../server/services/studies.ts';
import type { StudyStep } from '../engine/run-study.ts';
import { failRun, finishRun } from './finish-run.ts';
import { followProgress, publishRun, TurnLost, type Progress } from './progress.ts';
import { mostAttempts, parkedWords, type ScreenDeps } from './screen-deps.ts';

/** The engine's own steps lie between the composing of the study and the keeping of its result. */
const engineFromPercent = 10;
const engineToPercent = 90;

const refusedWords =
  'The screening could not be computed: the feeder model or the project does not hold together. An engineer sees what is wrong.';

const unkeptWords =
  'The screening was computed, and its result cannot be stored. An engineer sees what is wrong with it.';

function noteEngineStep(progress: Progress, { key, label, done, total }: StudyStep): void {
  if (done === total) return;
  const percent = engineFromPercent + Math.round(((engineToPercent - engineFromPercent) * done) / total);
  progress.step(key, label, percent);
}

async function computeRun(deps: ScreenDeps, turn: RunTurn, progress: Progress): Promise<void> {
  progress.step('taken', 'A worker has taken the run', 2);
  const equal = await findEqualResult(deps.db, turn);
  if (equal !== undefined) {
    progress.step('reused', 'Same basis as an earlier run: numbers reused', engineToPercent);
    await progress.settle();
    await finishRun(deps, turn, progress, { ...equal, kind: 'reused' });
    return;
  }
  progress.step('composing', 'Putting the feeder and the queue ahead together', 5);
  const { bytes, ruleSet } = await composeStudy(deps.db, JSON.parse(turn.basis) as StudyBasis);
  const answer = await deps.compute.study(bytes, ruleSet, (step) => noteEngineStep(progress, step));
  if (answer.kind === 'refused') {
    await progress.settle();
    const detail = answer.problems.join('\n');
    await failRun(deps, turn, progress.version, { error: refusedWords, detail });
    return;
  }
  progress.step('keeping', 'Keeping the result', engineToPercent + 5);
  await progress.settle();
  await finishRun(deps, turn, progress, { ...answer, kind: 'computed', studyBytes: bytes });
}

/** A fault, not a finding: tried again later, and after the last attempt parked where an administrator sees it. */
async function tryLater(deps: ScreenDeps, turn: RunTurn, version: number, error: unknown): Promise<void> {
  const detail = `Attempt ${turn.attempt}: ${error instanceof Error ? error.message : String(error)}`;
  if (turn.attempt >= mostAttempts) {
    await failRun(deps, turn, version, { error: parkedWords, detail });
    return;
  }
  const delaySeconds = deps.retryDelaysSeconds[turn.attempt - 1] ?? 0;
  const nextAttemptAt = new Date(deps.now().getTime() + delaySeconds * 1000);
  if (!(await releaseTurn(deps.db, turn, nextAttemptAt, detail))) throw new TurnLost(turn);
  await publishRun(deps, turn, version + 1);
}

/** What the database refuses to keep it refuses every time: that is for good, and holds up nobody else. */
async function giveUpOrTryLater(
  deps: ScreenDeps,
  turn: RunTurn,
  version: number,
  error: unknown,
): Promise<void> {
  if (!isContentError(error)) return tryLater(deps, turn, version, error);
  const detail = error instanceof Error ? error.message : String(error);
  await failRun(deps, turn, version, { error: unkeptWords, detail });
}

/**
 * One turn at one run. Does nothing when the run is not there to be taken; whatever goes wrong afterwards is written
 * to the run's row, so that a job that ends is never an error of the queue's.
 */
export async function screenRun(deps: ScreenDeps, runId: number): Promise<void> {
  const now = deps.now();
  const leaseUntil = new Date(now.getTime() + deps.leaseSeconds * 1000);
  const turn = await claimRun(deps.db, { runId, token: randomBytes(16), now, leaseUntil });
  if (turn === undefined) return;
  const progress = followProgress(deps, turn);
  try {
    try {
      await computeRun(deps, turn, progress);
    } catch (error) {
      if (error instanceof TurnLost) throw error;
      deps.log.warn({ err: error, runId, attempt: turn.attempt }, 'A run did not come to its end');
      await progress.settle().catch(() => undefined); // the first fault is the one that is told
      await giveUpOrTryLater(deps, turn, progress.version, error);
    }
  } catch (error) {
    if (!(error instanceof TurnLost)) throw error;
    deps.log.info(error.message);
  } finally {
    progress.stop();
  }
}
