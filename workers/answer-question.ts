import type { Answer, ComputeKind, ComputeStep, Question } from '../server/compute-messages.ts';
import { answerRoom } from './answer-room.ts';
import { answerRemedies, answerTrial, answerTrialParts } from './answer-trials.ts';
import { computePreApplication } from './compute-pre-application.ts';
import { computeSheet } from './compute-sheet.ts';
import { computeStudy } from './compute-study.ts';

type OnStep = (step: ComputeStep) => void;

const answerers: {
  [K in ComputeKind]: (question: Question<K>, onStep?: OnStep) => Answer<K> | Promise<Answer<K>>;
} = {
  study: ({ studyBytes, ruleSet }, onStep) => computeStudy(studyBytes, ruleSet, onStep),
  trial: answerTrial,
  'trial-parts': answerTrialParts,
  remedies: answerRemedies,
  room: answerRoom,
  'pre-application': ({ studyBytes, ruleSet, node }) => computePreApplication(studyBytes, ruleSet, node),
  sheet: computeSheet,
  'sheet-pdf': async ({ sheet, paper, madeAt }) =>
    (await import('./documents/working-sheet-pdf.ts')).makeWorkingSheetPdf(sheet, paper, madeAt),
  // The writer of documents is large: it is loaded by the first who asks for one.
  'pre-application-pdf': async ({ report, utility, timeZone, paper }) =>
    (await import('./documents/pre-application-pdf.ts')).makePreApplicationPdf(
      report,
      utility,
      timeZone,
      paper,
    ),
};

/** All that the compute child can be asked; throws only where the engine is at fault. */
export async function answerQuestion<K extends ComputeKind>(
  kind: K,
  question: Question<K>,
  onStep?: OnStep,
): Promise<Answer<K>> {
  return answerers[kind](question, onStep);
}
