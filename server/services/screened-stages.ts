import type { Stage } from '../../shared/rules/application-life.ts';

/** Stages in which a screening can still tell somebody something: handed in, and not decided for good. */
export const screenedStages: readonly Stage[] = [
  'submitted',
  'incomplete',
  'initial-review',
  'supplemental-offered',
  'supplemental-review',
  'study-required',
  'feasibility-study',
  'system-impact-study',
  'facilities-study',
];
