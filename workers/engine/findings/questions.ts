import type { Finding } from '../../../shared/schemas/findings.ts';
import { askedQuestions } from '../../../shared/schemas/findings.ts';
import { answerContribution } from './contribution.ts';
import { answerEffectiveGrounding } from './effective-grounding.ts';
import { answerInterruptingDuty } from './interrupting-duty.ts';
import type { Screening } from './screening.ts';
import { answerSectionPeakLoad } from './section-peak-load.ts';
import { answerShortCircuitRatio } from './short-circuit-ratio.ts';
import { answerTransformerConnection } from './transformer-connection.ts';

/** Answers every question that the engine asks, in the order in which they are shown. */
export function answerQuestions(screening: Screening): Finding[] {
  const effectiveGrounding = answerEffectiveGrounding(screening);
  const answers: Record<(typeof askedQuestions)[number]['id'], Finding[]> = {
    'section-peak-load': answerSectionPeakLoad(screening),
    contribution: answerContribution(screening),
    'interrupting-duty': answerInterruptingDuty(screening),
    'transformer-connection': answerTransformerConnection(screening, effectiveGrounding),
    'effective-grounding': effectiveGrounding,
    'short-circuit-ratio': answerShortCircuitRatio(screening),
  };
  return askedQuestions.flatMap(({ id }) => answers[id]);
}
