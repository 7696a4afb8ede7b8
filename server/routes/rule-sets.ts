import { route } from '../route-definition.ts';
import { listRuleSets } from '../services/rule-sets.ts';

export const ruleSetRoutes = [
  route({
    method: 'get',
    path: '/rule-sets',
    action: 'rule-sets.list',
    handle: ({ deps }) => listRuleSets(deps),
  }),
];
