import type { Answer, ComputeStep, Question } from '../server/compute-messages.ts';
import { listProblems } from './engine/problems.ts';
import { readStudy } from './engine/read-study.ts';
import { findRoom } from './engine/room/room.ts';
import { decodeText } from './study-text.ts';

/** From the bytes of a model's study to the room at each of its nodes; a step for every node. */
export function answerRoom(
  { studyBytes, ruleSet }: Question<'room'>,
  onStep?: (step: ComputeStep) => void,
): Answer<'room'> {
  const decoded = decodeText(studyBytes);
  const read = 'problems' in decoded ? decoded : readStudy(decoded.text);
  if ('problems' in read) return { kind: 'refused', problems: listProblems(read.problems) };
  const label = 'Room at every node';
  const room = findRoom(read.study, ruleSet, (done, total) => onStep?.({ key: 'room', label, done, total }));
  return { kind: 'room', room };
}
