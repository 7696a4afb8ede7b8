import type { RuleSet } from '../schemas/rule-sets.ts';
import { clockRules, feeRules } from './pro-forma-terms.ts';
import { fastTrackTable, screenRules } from './pro-forma-screens.ts';
import { faultRules } from './pro-forma-faults.ts';
import { islandRules } from './pro-forma-islands.ts';
import { voltageRules } from './pro-forma-voltage.ts';

/**
 * The federal pro forma: the Small Generator Interconnection Procedures of FERC Order 2006 as amended by Order 792
 * (145 FERC ¶61,159, 2013; 78 FR 73240), with the engineering questions that utilities ask beside it.
 */
export const proFormaRuleSet = {
  format: 'feederwright.rule-set/1',
  code: 'pro-forma',
  number: 2,
  name: 'Federal pro forma',
  rules: {
    ...screenRules,
    ...faultRules,
    ...islandRules,
    ...voltageRules,
  },
  clocks: clockRules,
  fees: feeRules,
  fastTrack: fastTrackTable,
  queueOrder: 'completeness',
} satisfies RuleSet;
