import type { RuleSet } from '../schemas/rule-sets.ts';

/** Rules for fault current, duty and strength, and for what protection sees. */
export const faultRules = {
  contribution: {
    stage: 'initial-review',
    limits: [{ limit: 10, comparison: '<=', consequence: 'supplemental' }],
    unit: '%',
    source: 'SGIP 2.2.1.4',
    readOrMemory: 'read',
    // True: the sum of what each generator gives by itself takes the place of the increase.
    parameters: { ownCurrentsSum: false },
  },
  'interrupting-duty': {
    stage: 'initial-review',
    limits: [{ limit: 87.5, comparison: '<=', consequence: 'supplemental' }],
    unit: '%',
    source: 'SGIP 2.2.1.5',
    readOrMemory: 'read',
  },
  'short-circuit-ratio': {
    stage: 'engineering',
    limits: [
      { limit: 5, comparison: '>=', consequence: 'study' },
      { limit: 20, comparison: '>=', consequence: 'note' },
    ],
    unit: '',
    source: 'common practice, no source',
    readOrMemory: 'memory',
  },
  'ground-reach': {
    stage: 'engineering',
    limits: [{ limit: 2, comparison: '>=', consequence: 'study' }],
    unit: '',
    source: 'common practice, no source',
    readOrMemory: 'memory',
    // The limit is that of bolted faults up to 15 kV. A rule may add other classes: `multipleAbove30Kv` and the like.
    parameters: {
      multipleAbove15Kv: 2,
      resistiveMultiple: 1,
      resistiveMultipleAbove15Kv: 1,
      largestFallPercent: 10,
      largestFallPercentAbove15Kv: 10,
      fusesBoundZones: false,
    },
    scope: 'the zone of each automatic device between the source and the project',
  },
  'phase-reach': {
    stage: 'engineering',
    limits: [{ limit: 2, comparison: '>=', consequence: 'study' }],
    unit: '',
    source: 'common practice, no source',
    readOrMemory: 'memory',
    parameters: { multipleAbove15Kv: 2, fusesBoundZones: false },
    scope: 'the zone of each automatic device between the source and the project',
  },
  'sympathetic-trip': {
    stage: 'engineering',
    limits: [{ limit: 0.8, comparison: '<=', consequence: 'study' }],
    unit: '',
    source: 'common practice, no source',
    readOrMemory: 'memory',
    scope: 'the breaker of the feeder, for faults on its bus and on the feeders beside it',
  },
} satisfies RuleSet['rules'];
