import type { RuleSet } from '../schemas/rule-sets.ts';

/**
 * The federal pro forma: the Small Generator Interconnection Procedures of FERC Order 2006 as amended by Order 792
 * (145 FERC ¶61,159, 2013; 78 FR 73240), with the engineering questions that utilities ask beside it.
 */
export const proFormaRuleSet: RuleSet = {
  format: 'feederwright.rule-set/1',
  code: 'pro-forma',
  number: 1,
  name: 'Federal pro forma',
  rules: {
    'section-peak-load': {
      stage: 'initial-review',
      limits: [{ limit: 15, comparison: '<=', consequence: 'supplemental' }],
      unit: '%',
      source: 'SGIP 2.2.1.2',
      readOrMemory: 'read',
      sizeBasis: 'nameplate',
    },
    contribution: {
      stage: 'initial-review',
      limits: [{ limit: 10, comparison: '<=', consequence: 'supplemental' }],
      unit: '%',
      source: 'SGIP 2.2.1.4',
      readOrMemory: 'read',
    },
    'interrupting-duty': {
      stage: 'initial-review',
      limits: [{ limit: 87.5, comparison: '<=', consequence: 'supplemental' }],
      unit: '%',
      source: 'SGIP 2.2.1.5',
      readOrMemory: 'read',
    },
    'transformer-connection': {
      stage: 'initial-review',
      limits: [{ limit: null, comparison: '<=', consequence: 'supplemental' }],
      unit: '',
      source: 'SGIP 2.2.1.6',
      readOrMemory: 'read',
    },
    'effective-grounding': {
      stage: 'engineering',
      limits: [{ limit: 80, comparison: '<=', consequence: 'study' }],
      unit: '%',
      source: 'IEEE C62.92.1 (coefficient of grounding; value from memory)',
      readOrMemory: 'memory',
      prefaultFactor: 1.05,
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
  },
};
