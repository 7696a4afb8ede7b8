import type { RuleSet } from '../schemas/rule-sets.ts';

/** Rules for what happens once the utility is gone. */
export const islandRules = {
  'effective-grounding': {
    stage: 'engineering',
    limits: [{ limit: 80, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'IEEE C62.92.1 (coefficient of grounding; value from memory)',
    readOrMemory: 'memory',
    prefaultFactor: 1.05,
    // The usual criterion of IEEE 142 (values from memory), shown and never deciding.
    parameters: { x0OverX1: 3, r0OverX1: 1 },
  },
  'inverter-grounding': {
    stage: 'engineering',
    scope: 'what each opened device cuts off',
    limits: [{ limit: 138, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'IEEE 1547-2018 7.4.1, by the method of IEEE C62.92.6 (method from memory)',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
    // Behind machines and what else holds voltage.
    prefaultFactor: 1.05,
  },
  'high-side-float': {
    stage: 'engineering',
    scope: 'all that the substation transformer feeds',
    // Strict: at a balance nothing flows back, and nothing keeps it from doing so the next minute.
    limits: [{ limit: 100, comparison: '<', consequence: 'study' }],
    unit: '%',
    source: 'common practice, no source',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
  },
  'load-rejection': {
    stage: 'engineering',
    scope: 'what each opened device cuts off',
    limits: [
      { limit: 138, comparison: '<=', consequence: 'study' },
      { limit: 130, comparison: '<=', consequence: 'study' },
    ],
    unit: '%',
    source: 'IEEE 1547-2018 7.4.1 (138 % for one period) and 7.4.2 (130 % for 166 ms; value from memory)',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
  },
  islanding: {
    stage: 'engineering',
    scope: 'what each opened device cuts off',
    limits: [{ limit: 2 / 3, comparison: '<=', consequence: 'study' }],
    unit: '',
    source:
      'widely used utility practice (generation up to two thirds of the minimum load; value from memory)',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
  },
  reclosing: {
    stage: 'engineering',
    limits: [{ limit: null, comparison: '>=', consequence: 'study' }],
    unit: '',
    source: 'IEEE 1547-2018 8.1 (2 s; value from memory); common practice for supervision, no source',
    readOrMemory: 'memory',
    parameters: { islandStopS: 2 },
  },
  listing: {
    stage: 'engineering',
    limits: [{ limit: 5, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'IEEE 1547-2018 7.3 (total rated-current distortion; value from memory)',
    readOrMemory: 'memory',
    parameters: { standards: 'UL 1741; IEEE 1547; IEEE 1547.1' },
  },
} satisfies RuleSet['rules'];
