import type { QuestionId } from '../../../shared/schemas/findings.ts';
import { listAsked } from '../../../shared/schemas/rule-sets.ts';
import { answerContribution } from './contribution.ts';
import { answerEffectiveGrounding } from './effective-grounding.ts';
import { answerInterruptingDuty } from './interrupting-duty.ts';
import type { Answered } from './judge.ts';
import { answerHighSideFloat } from './high-side-float.ts';
import { answerInverterGrounding } from './inverter-grounding.ts';
import { answerGroundReach } from './ground-reach.ts';
import { answerIslanding } from './islanding.ts';
import { answerListing } from './listing.ts';
import { answerLoadRejection } from './load-rejection.ts';
import { answerPhaseReach } from './phase-reach.ts';
import { answerReclosing } from './reclosing.ts';
import { answerRapidVoltageChange } from './rapid-voltage-change.ts';
import { answerReverseFlow } from './reverse-flow.ts';
import { answerFastTrackSize } from './fast-track-size.ts';
import { answerJurisdiction } from './jurisdiction.ts';
import { answerSpotNetwork } from './spot-network.ts';
import { answerSharedSecondary } from './shared-secondary.ts';
import { answerCentreTapBalance } from './centre-tap-balance.ts';
import { answerTransientStability } from './transient-stability.ts';
import { answerNoConstruction } from './no-construction.ts';
import { answerMinimumLoad } from './minimum-load.ts';
import { answerVoltageQuality } from './voltage-quality.ts';
import { answerSafetyReliability } from './safety-reliability.ts';
import type { Screening } from './screening.ts';
import { answerSectionPeakLoad } from './section-peak-load.ts';
import { answerService } from './service.ts';
import { answerShortCircuitRatio } from './short-circuit-ratio.ts';
import { answerSympatheticTrip } from './sympathetic-trip.ts';
import { answerSteadyVoltage } from './steady-voltage.ts';
import { answerTransformerConnection } from './transformer-connection.ts';

/** The answer to a question may rest on those to others: it asks for them here, and each is worked out once. */
export type AnswerOf = (id: QuestionId) => readonly Answered[];

const answers: Partial<Record<QuestionId, (screening: Screening, answerOf: AnswerOf) => Answered[]>> = {
  'fast-track-size': answerFastTrackSize,
  jurisdiction: answerJurisdiction,
  'section-peak-load': answerSectionPeakLoad,
  'spot-network': answerSpotNetwork,
  contribution: answerContribution,
  'interrupting-duty': answerInterruptingDuty,
  'transformer-connection': answerTransformerConnection,
  'shared-secondary': answerSharedSecondary,
  'centre-tap-balance': answerCentreTapBalance,
  'transient-stability': answerTransientStability,
  'no-construction': answerNoConstruction,
  'minimum-load': answerMinimumLoad,
  'voltage-quality': answerVoltageQuality,
  'safety-reliability': answerSafetyReliability,
  'effective-grounding': answerEffectiveGrounding,
  'inverter-grounding': answerInverterGrounding,
  'high-side-float': answerHighSideFloat,
  'load-rejection': answerLoadRejection,
  islanding: answerIslanding,
  reclosing: (screening, answerOf) => answerReclosing(screening, answerOf('islanding')),
  listing: answerListing,
  'steady-voltage': answerSteadyVoltage,
  'rapid-voltage-change': answerRapidVoltageChange,
  'reverse-flow': answerReverseFlow,
  service: answerService,
  'short-circuit-ratio': answerShortCircuitRatio,
  'ground-reach': answerGroundReach,
  'phase-reach': answerPhaseReach,
  'sympathetic-trip': answerSympatheticTrip,
};

/** Answers every question that the rule set asks, in the order in which they are shown. */
export function answerQuestions(screening: Screening): Answered[] {
  const known = new Map<QuestionId, readonly Answered[]>();
  const answerOf: AnswerOf = (id) => {
    const answer = answers[id];
    if (!answer || !screening.ruleSet.rules[id]) return [];
    if (!known.has(id)) known.set(id, answer(screening, answerOf));
    return known.get(id)!;
  };
  return listAsked(screening.ruleSet).flatMap(({ id }) => answerOf(id as QuestionId));
}
