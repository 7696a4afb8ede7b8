/* The questions of a screening and the answers to them. */

export type Verdict = 'within' | 'outside' | 'needs-data' | 'not-applicable';

export type Comparison = '<=' | '<' | '>=';

export type Consequence = 'none' | 'supplemental' | 'study' | 'note';

/** One answer; `id` and `element` together are unique in a result. */
export type Finding = {
  /** The question's id, of `questions`. */
  id: string;
  /** The question in plain words. */
  question: string;
  /** What the answer is about, where a question is put to several or one of several decides. */
  element?: string;
  verdict: Verdict;
  /** What was measured, unrounded; null where there is nothing to measure. */
  value: number | null;
  /** The same quantity without the project. */
  before?: number | null;
  comparison: Comparison;
  limit: number | null;
  unit: string;
  /** What follows from the answer: "none" when it is within. */
  consequence: Consequence;
  source: string;
  note?: string;
};

export type Question = { id: string; question: string };

/** Every question there is, in the order in which answers are shown; a rule set says which of them are asked. */
export const questions = [
  {
    id: 'fast-track-size',
    question: 'Is the project small enough for Fast Track at this voltage and place?',
  },
  { id: 'jurisdiction', question: 'Is the point of interconnection on a system subject to these rules?' },
  {
    id: 'section-peak-load',
    question: 'Is all generation small against the peak load of each line section?',
  },
  { id: 'spot-network', question: 'On a spot network: inverters only, and small against its load?' },
  { id: 'contribution', question: 'Does all generation together add little fault current?' },
  { id: 'interrupting-duty', question: 'Does everything that interrupts faults keep its margin?' },
  { id: 'transformer-connection', question: 'Does the way the project connects suit the type of line?' },
  { id: 'shared-secondary', question: 'Single-phase on a shared secondary: is all of it together small?' },
  {
    id: 'centre-tap-balance',
    question: 'Single-phase on a 240 V service: does it leave the two halves balanced?',
  },
  {
    id: 'transient-stability',
    question: 'Is there a posted transient-stability limit, and is the total under it?',
  },
  { id: 'no-construction', question: 'Can it connect without new utility facilities?' },
  { id: 'minimum-load', question: 'Does all generation stay under the minimum load of each line section?' },
  { id: 'voltage-quality', question: 'Does voltage stay regulated, steady and clean with all generation?' },
  { id: 'safety-reliability', question: 'Does nothing about the line section call for the study process?' },
  {
    id: 'effective-grounding',
    question: 'Do healthy phases stay in bounds when the utility is gone and a line touches ground?',
  },
  {
    id: 'inverter-grounding',
    question: 'Do healthy phases stay in bounds when inverters alone feed a ground fault?',
  },
  {
    id: 'high-side-float',
    question: 'Can the substation’s high side float when the transmission line opens?',
  },
  { id: 'load-rejection', question: 'How high can the voltage go when the load is cut off?' },
  {
    id: 'steady-voltage',
    question: 'Does the steady voltage stay in range along the section and at the connection?',
  },
  {
    id: 'rapid-voltage-change',
    question: 'Does a trip, a ramp or an energisation change the voltage too fast?',
  },
  { id: 'short-circuit-ratio', question: 'Is the grid strong enough here for the project?' },
  { id: 'ground-reach', question: 'Does ground protection still see the end of its zone?' },
  { id: 'phase-reach', question: 'Does phase protection still reach the end of its zone?' },
  { id: 'sympathetic-trip', question: 'Could a healthy feeder trip for a fault next door?' },
  { id: 'islanding', question: 'Can it run on as an island?' },
  { id: 'reclosing', question: 'Is automatic reclosing safe with the project running?' },
  { id: 'reverse-flow', question: 'Can lines, transformers and regulators carry the export?' },
  { id: 'service', question: 'Does the service transformer and drop carry it?' },
  { id: 'listing', question: 'Is the equipment listed, and are its harmonics within limits?' },
] as const satisfies readonly Question[];

export type QuestionId = (typeof questions)[number]['id'];
