import { fork, type ChildProcess } from 'node:child_process';
import type { Logger } from 'pino';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import type {
  Answer,
  ComputeKind,
  ComputeReply,
  ComputeRequest,
  ComputeStep,
  Question,
  StudyAnswer,
} from './compute-messages.ts';

/* The resident compute child, for worker and server alike: both start it by its path, and know the engine no other way. */

/** The computation did not come to an end, through no fault of the study: worth another try. */
export class ComputeFault extends Error {
  override name = 'ComputeFault';
}

type OnStep = (step: ComputeStep) => void;

export interface Compute {
  ask<K extends ComputeKind>(kind: K, question: Question<K>, onStep?: OnStep): Promise<Answer<K>>;
  study(studyBytes: Uint8Array, ruleSet: RuleSet, onStep: OnStep): Promise<StudyAnswer>;
  /** Ends the child, and with it what is under way. */
  close(): void;
}

interface ComputeSettings {
  /** The child's program, TypeScript or built. */
  file: string;
  limitSeconds: number;
  log: Logger;
}

function startChild(file: string): ChildProcess {
  return fork(file, {
    serialization: 'advanced',
    execArgv: file.endsWith('.ts') ? ['--import', 'tsx'] : ['--enable-source-maps'],
  });
}

/** One question to the child; it settles when the child answers, ends, or takes too long, whichever comes first. */
function askChild<K extends ComputeKind>(
  child: ChildProcess,
  request: ComputeRequest<K>,
  limitSeconds: number,
  onStep: OnStep | undefined,
): Promise<Answer<K>> {
  return new Promise((resolve, reject) => {
    const fail = (words: string) => settle(() => reject(new ComputeFault(words)));
    const late = setTimeout(() => {
      child.kill('SIGKILL');
      fail(`The computation took longer than ${limitSeconds} s and was ended`);
    }, limitSeconds * 1000);
    const onMessage = (reply: ComputeReply) => {
      if (reply.id !== request.id) return;
      if (reply.kind === 'step') onStep?.(reply.step);
      // The child answers a question of a kind with an answer of that kind.
      else if (reply.kind === 'answer') settle(() => resolve(reply.answer as Answer<K>));
      else fail(`The engine failed: ${reply.message}`);
    };
    const onExit = (code: number | null, signal: NodeJS.Signals | null) =>
      fail(`The compute process ended in mid-computation (${signal ?? `exit code ${code}`})`);
    const onError = (error: Error) => fail(`The compute process: ${error.message}`);
    function settle(finish: () => void): void {
      clearTimeout(late);
      child.off('message', onMessage).off('exit', onExit).off('error', onError);
      finish();
    }
    child.on('message', onMessage).once('exit', onExit).once('error', onError);
    child.send(request, (error) => error && fail(`The compute process could not be asked: ${error.message}`));
  });
}

/** Starts the child at once, and again when it is needed after it has died; answers one question after the other. */
export function openCompute({ file, limitSeconds, log }: ComputeSettings): Compute {
  let child: ChildProcess | undefined;
  let closed = false;
  let lastId = 0;
  let lastQuestion: Promise<unknown> = Promise.resolve();

  function getChild(): ChildProcess {
    if (closed) throw new ComputeFault('The compute process was told to end');
    // One that was killed a moment ago is still there, and answers no more.
    if (child?.connected === true && !child.killed) return child;
    const started = startChild(file);
    child = started;
    // Without a listener an 'error' would end this process.
    started.on('error', (error) => log.error({ err: error }, 'The compute process'));
    started.once('exit', (code, signal) => {
      if (closed || child !== started) return;
      child = undefined;
      log.warn({ code, signal }, 'The compute process ended; the next computation starts another');
    });
    return started;
  }

  function ask<K extends ComputeKind>(kind: K, question: Question<K>, onStep?: OnStep): Promise<Answer<K>> {
    const request: ComputeRequest<K> = { id: ++lastId, kind, question };
    const answer = lastQuestion.then(() => askChild(getChild(), request, limitSeconds, onStep));
    lastQuestion = answer.catch(() => undefined); // the one who asked hears of it
    return answer;
  }

  getChild();
  return {
    ask,
    study: (studyBytes, ruleSet, onStep) => ask('study', { studyBytes, ruleSet }, onStep),
    close() {
      closed = true;
      child?.kill('SIGKILL');
    },
  };
}
