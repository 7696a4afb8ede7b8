import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { QuestionId } from '../../../../shared/schemas/findings.ts';
import type { Rule, RuleSet } from '../../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../../shared/schemas/study.ts';
import type { Answered } from '../../../../workers/engine/findings/judge.ts';
import { workStudy } from '../../../../workers/engine/run-study.ts';
import { checkedStudy } from '../cases.ts';

/*
 * A feeder to work by hand, all in ohms and lossless: at 12.47 kV the source's Z1 = Z0 = j1 (strongest) or j2 (weakest), two
 * lines of Z1 = j1 and Z0 = j3 each, the breaker CB at the bus, another feeder beside it, and the project at `mid`.
 */
export function handStudy(change: (study: Study) => void = () => {}): Study {
  const line = (id: string, from: string, to: string) => ({
    id,
    from,
    to,
    phases: 'ABC',
    km: 1,
    z1: { r: 0, x: 1 },
    z0: { r: 0, x: 3 },
  });
  const study: Study = {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    minimumFaultOhm: 20,
    feeder: {
      nodes: ['bus', 'mid', 'end', 'beside'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
      sources: [
        {
          id: 'utility',
          node: 'bus',
          max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 1 } },
          min: { z1: { r: 0, x: 2 }, z0: { r: 0, x: 2 } },
        },
      ],
      lines: [line('l1', 'bus', 'mid'), line('l2', 'mid', 'end'), line('l3', 'bus', 'beside')],
      devices: [
        {
          id: 'CB',
          branch: 'l1',
          end: 'from',
          kind: 'breaker',
          interruptingKa: 16,
          phasePickupA: 400,
          groundPickupA: 100,
        },
      ],
    },
    project: { id: 'plant', node: 'mid', groundingBanks: [{ id: 'bank', node: 'mid', z0: { r: 0, x: 5 } }] },
  };
  change(study);
  return checkedStudy(study);
}

/** Line to neutral, in V. */
export const phaseVolts = 12470 / Math.sqrt(3);

export function answersTo(id: QuestionId, study: Study, rule: Partial<Rule> = {}): Answered[] {
  const shipped = (proFormaRuleSet.rules as RuleSet['rules'])[id]!;
  const ruleSet: RuleSet = { ...proFormaRuleSet, rules: { [id]: { ...shipped, ...rule } } };
  return workStudy(study, ruleSet).worked!.answers.filter((answer) => answer.id === id);
}
