import { questions, type QuestionId } from './schemas/findings.ts';
import type { RuleSetView } from './schemas/rule-set-views.ts';

/** The pages of the form. What no page of questions names stands on the last of them. */
export const areaKeys = [
  'name',
  'sizes',
  'screens',
  'supplemental',
  'grounding',
  'protection',
  'voltage',
  'other',
  'clocks',
  'fees',
] as const;
export type AreaKey = (typeof areaKeys)[number];

export const areaLabels: Record<AreaKey, string> = {
  name: 'Name',
  sizes: 'Fast Track sizes',
  screens: 'Screens of the initial review',
  supplemental: 'Screens of the supplemental review',
  grounding: 'Grounding and islands',
  protection: 'Strength and protection',
  voltage: 'Voltage, flow and service',
  other: 'Other questions',
  clocks: 'Time limits',
  fees: 'Charges',
};

const placed: Partial<Record<AreaKey, readonly QuestionId[]>> = {
  screens: [
    'fast-track-size',
    'jurisdiction',
    'section-peak-load',
    'spot-network',
    'contribution',
    'interrupting-duty',
    'transformer-connection',
    'shared-secondary',
    'centre-tap-balance',
    'transient-stability',
    'no-construction',
  ],
  supplemental: ['minimum-load', 'voltage-quality', 'safety-reliability'],
  grounding: [
    'effective-grounding',
    'inverter-grounding',
    'high-side-float',
    'load-rejection',
    'islanding',
    'reclosing',
    'listing',
  ],
  protection: ['short-circuit-ratio', 'ground-reach', 'phase-reach', 'sympathetic-trip'],
  voltage: ['steady-voltage', 'rapid-voltage-change', 'reverse-flow', 'service'],
};

/** The questions on one page, in the order in which answers are shown. */
export function listAreaQuestions(area: AreaKey): { id: QuestionId; question: string }[] {
  const elsewhere = Object.values(placed).flat();
  return questions.filter(({ id }) =>
    area === 'other' ? !elsewhere.includes(id) : placed[area]?.includes(id),
  );
}

/** Pages on which there is something to write. */
export function listAreas({ content, available }: Pick<RuleSetView, 'content' | 'available'>): AreaKey[] {
  const hasQuestion = (area: AreaKey) =>
    listAreaQuestions(area).some(({ id }) => content.rules[id] ?? available[id]);
  return areaKeys.filter((area) => {
    if (area === 'sizes') return content.fastTrack !== undefined;
    return area === 'name' || area === 'clocks' || area === 'fees' || hasQuestion(area);
  });
}
