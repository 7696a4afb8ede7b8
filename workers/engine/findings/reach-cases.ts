import type { CaseChoice } from '../case.ts';
import { nodeAt } from '../model-parts.ts';
import type { SolvedCase } from '../solve-case.ts';
import { solveCase, withoutInverters } from '../solve-case.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/*
 * The cases in which reach is judged: the weakest source, the project's transformers and ground sources in, machines in and
 * out, the ground sources of others in and out, inverters feeding and not. Each stands beside the same without the project.
 */

export type ReachCase = {
  readonly operating: OperatingCase;
  /** What is in and out, in words. */
  readonly words: string;
  readonly after: SolvedCase;
  readonly before: SolvedCase;
};

/** Two cases that differ in their inverters alone, which are in none of the networks. */
export type ReachNetworks = {
  readonly after: SolvedCase;
  readonly before: SolvedCase;
  readonly cases: readonly ReachCase[];
};

type Variant = Pick<CaseChoice, 'machines'> & { words: string; out: readonly string[] };

/** Solves the cases of one way to run the feeder. */
export function solveReachCases(screening: Screening, operating: OperatingCase): ReachNetworks[] {
  const { model, poi } = screening;
  const { choice } = operating.solver.solve('minimum', nodeAt(model, poi).kv);
  return listVariants(screening).map(({ machines, words, out }) => {
    const shared = {
      ...choice,
      machines,
      inverters: 'all',
      ...(out.length > 0 && { out: new Set([...(choice.out ?? []), ...out]) }),
    } as const;
    const after = solveCase(model, { ...shared, project: true });
    const before = solveCase(model, { ...shared, project: false });
    const inverterCases = model.inverters.length === 0 ? [true] : [true, false];
    const cases = inverterCases.map((isFeeding): ReachCase => {
      const inverterWords =
        model.inverters.length === 0 ? [] : [`inverters ${isFeeding ? 'feeding' : 'not feeding'}`];
      return {
        operating,
        words: [words, ...inverterWords].filter(Boolean).join(', '),
        after: isFeeding ? after : withoutInverters(after),
        before: isFeeding ? before : withoutInverters(before),
      };
    });
    return { after, before, cases };
  });
}

/** Machines all in, all out, or the project's alone; others' ground sources in or out; without repeating itself. */
function listVariants({ study, model }: Screening): Variant[] {
  const ofProject = model.machines.filter((machine) => machine.ofProject).length;
  const ofOthers = model.machines.length - ofProject;
  const machineChoices: { machines: Variant['machines']; words: string }[] =
    model.machines.length === 0
      ? [{ machines: 'all', words: '' }]
      : [
          { machines: 'all', words: 'all machines in' },
          { machines: 'none', words: 'all machines out' },
        ];
  if (ofProject > 0 && ofOthers > 0) {
    machineChoices.push({ machines: 'project', words: "the project's machines alone in" });
  }
  const lists = [study.feeder.groundingBanks, study.feeder.transformers, study.feeder.lines];
  const out = lists.flatMap((list) =>
    (list ?? []).filter((each) => each.with !== undefined).map(({ id }) => id),
  );
  return machineChoices.flatMap(({ machines, words }) =>
    out.length === 0
      ? [{ machines, words, out: [] }]
      : [
          { machines, words: join(words, 'the ground sources of others in'), out: [] },
          { machines, words: join(words, 'the ground sources of others out'), out },
        ],
  );
}

function join(...parts: string[]): string {
  return parts.filter(Boolean).join(', ');
}
