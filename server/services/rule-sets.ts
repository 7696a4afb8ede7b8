import { listRuleSetVersions } from '../../db/repositories/rule-sets.ts';
import { formatQuantity } from '../../shared/format.ts';
import type { RuleSetVersionView } from '../../shared/schemas/people.ts';
import { askedQuestions, type Comparison } from '../../shared/schemas/findings.ts';
import type { Rule, RuleLimit } from '../../shared/schemas/rule-sets.ts';
import type { Deps } from '../context.ts';

const comparisonWords: Record<Comparison, string> = { '<=': 'at most', '<': 'less than', '>=': 'at least' };

/** As many digits as the limit itself has: 87.5 %, 15 %. */
function describeLimit({ limit, comparison }: RuleLimit, unit: string): string {
  if (limit === null) return 'by table';
  const decimals = String(limit).split('.')[1]?.length ?? 0;
  return `${comparisonWords[comparison]} ${formatQuantity(limit, unit, decimals)}`;
}

function describeRule(rule: Rule): string {
  return rule.limits.map((limit) => describeLimit(limit, rule.unit)).join('; ');
}

/** Every version of every rule set, the one in force last first. */
export async function listRuleSets(deps: Deps): Promise<RuleSetVersionView[]> {
  const versions = await listRuleSetVersions(deps.db);
  return versions.map((version) => ({
    code: version.code,
    number: version.number,
    name: version.content.name,
    validFrom: version.validFrom,
    firstUsedAt: version.firstUsedAt?.toISOString() ?? null,
    sha256: version.sha256.toString('hex'),
    limits: askedQuestions.map(({ id, question }) => ({
      question,
      limit: describeRule(version.content.rules[id]),
      source: version.content.rules[id].source,
      standing: version.content.rules[id].readOrMemory,
    })),
  }));
}
