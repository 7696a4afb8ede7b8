import type { TrialChange } from '../../../shared/schemas/trials.ts';
import type { RemedyFigure } from '../../../shared/schemas/remedies.ts';
import { projectKva } from '../project-size.ts';
import { applyChanges } from '../trials.ts';
import { sizeGroundBank, sizeNeutralReactor } from '../ground-source.ts';
import { findNeutralRatings, findPlant } from './plant.ts';
import type { Proposal, Proposer, Search } from './remedy-tests.ts';

/* Ground sources: a bank, a machine's neutral, the windings of the transformer, a reactor in its neutral. */

/** X0/X1 that utilities aim at for machines, unless the rule set says (common practice; value from memory). */
const usualTarget = 2.5;
/** Tried when the aim does not bring the coefficient within in every island case. */
const furtherTargets = [2, 1.5, 1, 0.75, 0.5, 0.3];
const targetSource = 'X0/X1 that utilities aim at (value from memory), checked in every island case';
/** IEEE P1547.8 draft: X0 of 0.6 pu ± 10 % on the plant's base, X0/R0 at least 4 (values from memory). */
const bankPerUnits = [0.6, 0.54, 0.66];
const bankXr = 4;
const bankSource =
  'X0 0.6 pu ± 10 % on the plant’s base, X0/R0 at least 4 (IEEE P1547.8 draft, values from memory)';

function listTargets({ ruleSet }: Search): number[] {
  const asked = ruleSet.rules['effective-grounding']?.parameters?.targetX0OverX1;
  const target = typeof asked === 'number' ? asked : usualTarget;
  return [target, ...furtherTargets.filter((each) => each < target)];
}

/** The proposal with what the neutral is to carry. */
function withRatings(
  search: Search,
  words: string,
  changes: TrialChange[],
  figures: RemedyFigure[],
): Proposal {
  const applied = applyChanges(search.study, changes);
  const ratings = 'problems' in applied ? [] : findNeutralRatings(applied.study, search.ruleSet);
  return { words, changes, figures: [...figures, ...ratings] };
}

function ohms(value: number): string {
  return `${value.toPrecision(3)} Ω`;
}

/** For machines: a bank at the point of interconnection that brings the plant's X0 to the aimed share of its X1. */
export const proposeMachineBank: Proposer = (search) => {
  const { study, holds } = search;
  const { z1, z0 } = findPlant(study);
  if (!z1) return undefined;
  for (const target of listTargets(search)) {
    const wanted = target * z1.im;
    // What is there already stands beside the bank: 1/X = 1/wanted − 1/X0.
    if (z0 && z0.im <= wanted) continue;
    const xOhm = z0 ? 1 / (1 / wanted - 1 / z0.im) : wanted;
    const rOhm = xOhm / bankXr;
    const changes: TrialChange[] = [{ kind: 'add-bank', node: study.project.node, rOhm, xOhm }];
    if (!holds(changes)) continue;
    return withRatings(
      search,
      `Add a ground bank of ${ohms(xOhm)} reactance a phase at the point of interconnection.`,
      changes,
      [
        { words: 'X0/X1 of the plant with it', value: target, unit: '', source: targetSource },
        { words: 'Bank, X0', value: xOhm, unit: 'Ω', source: targetSource },
        { words: 'Bank, R0', value: rOhm, unit: 'Ω', source: targetSource },
      ],
    );
  }
  return 'A ground bank down to X0/X1 of 0.3 would still leave it outside.';
};

/** For machines behind windings that lead zero sequence through: the machine's own neutral, Xn = (k·X1 − X0)/3. */
export const proposeMachineNeutral: Proposer = (search) => {
  const { study, holds } = search;
  const machine = (study.project.machines ?? []).find(
    ({ kind, x0Pu, neutral }) => kind === 'synchronous' && x0Pu !== undefined && neutral !== 'solid',
  );
  if (!machine) return undefined;
  const solid: TrialChange = { kind: 'machine-neutral', element: machine.id, neutral: { kind: 'solid' } };
  const applied = applyChanges(study, [solid]);
  if ('problems' in applied) return undefined;
  const { z1, z0, kv } = findPlant(applied.study);
  if (!z1 || !z0) return undefined;
  const machineKv = [...study.feeder.nodes, ...(study.project.nodes ?? [])].find(
    ({ id }) => id === machine.node,
  )!.kv;
  for (const target of listTargets(search)) {
    const reactor = { targetX0OverX1: target, x1Ohms: z1.im, transformerX0Ohms: z0.im };
    const xOhm = sizeNeutralReactor(reactor) * (machineKv / kv) ** 2;
    const changes: TrialChange[] = [
      xOhm === 0 ? solid : { ...solid, neutral: { kind: 'impedance', rOhm: 0, xOhm } },
    ];
    if (!holds(changes)) continue;
    return withRatings(
      search,
      xOhm === 0
        ? `Ground the neutral of machine ${machine.id} solidly.`
        : `Ground the neutral of machine ${machine.id} through a reactor of ${ohms(xOhm)}.`,
      changes,
      [{ words: 'Neutral reactor', value: xOhm, unit: 'Ω', source: targetSource }],
    );
  }
  return 'Grounding the machine’s neutral would still leave it outside.';
};

/** Windings that make the transformer a ground source, its neutral through Xn = (k·X1 − XT0)/3 where that is above 0. */
export const proposeWindings: Proposer = (search) => {
  const { study, holds } = search;
  const transformer = study.project.transformers?.find(({ from }) => from === study.project.node);
  if (!transformer || /^YNd/.test(transformer.connection)) return undefined;
  const solid = { kind: 'transformer' as const, element: transformer.id, connection: 'YNd1' as const };
  const applied = applyChanges(study, [{ ...solid, neutralFrom: { kind: 'solid' } }]);
  if ('problems' in applied) return undefined;
  const { z1, z0 } = findPlant(applied.study);
  if (!z0) return undefined;
  for (const target of z1 ? listTargets(search) : [0]) {
    const xOhm = z1
      ? sizeNeutralReactor({ targetX0OverX1: target, x1Ohms: z1.im, transformerX0Ohms: z0.im })
      : 0;
    const neutralFrom =
      xOhm === 0 ? { kind: 'solid' as const } : { kind: 'impedance' as const, rOhm: 0, xOhm };
    const changes: TrialChange[] = [{ ...solid, neutralFrom }];
    if (!holds(changes)) continue;
    return withRatings(
      search,
      xOhm === 0
        ? 'Choose a transformer with a grounded star on the utility side and a delta on the site side.'
        : `Choose a transformer with a star on the utility side, its neutral through ${ohms(xOhm)}, and a delta on the site side.`,
      changes,
      [{ words: 'Neutral reactor', value: xOhm, unit: 'Ω', source: targetSource }],
    );
  }
  return 'A transformer that is a ground source would still leave it outside.';
};

/** Where the transformer grounds more than is asked for: a reactor in its neutral, up to the aimed X0/X1. */
export const proposeNeutralReactor: Proposer = (search) => {
  const { study, holds } = search;
  const transformer = study.project.transformers?.find(
    ({ from, connection }) => from === study.project.node && /^YNd/.test(connection),
  );
  const { z1, z0 } = findPlant(study);
  const [target] = listTargets(search);
  if (!transformer || !z1 || !z0 || z0.im >= target! * z1.im) return undefined;
  const xOhm = sizeNeutralReactor({
    targetX0OverX1: target!,
    x1Ohms: z1.im,
    transformerX0Ohms: z0.im,
  });
  const before = typeof transformer.neutralFrom === 'object' ? transformer.neutralFrom : { r: 0, x: 0 };
  const neutral = { kind: 'impedance' as const, rOhm: before.r, xOhm: before.x + xOhm };
  const changes: TrialChange[] = [{ kind: 'transformer', element: transformer.id, neutralFrom: neutral }];
  if (!holds(changes)) {
    return `A reactor of ${ohms(neutral.xOhm)} in the transformer’s neutral would still leave it outside.`;
  }
  return withRatings(
    search,
    `Put a reactor of ${ohms(neutral.xOhm)} into the neutral of transformer ${transformer.id}.`,
    changes,
    [
      { words: 'Neutral reactor', value: neutral.xOhm, unit: 'Ω', source: targetSource },
      { words: 'X0/X1 of the plant with it', value: target!, unit: '', source: targetSource },
    ],
  );
};

/** For inverters: a bank on the plant's base, Zbase = kV²/MVA. Example: 5 MVA at 12.47 kV take 18.660 Ω and 4.665 Ω. */
export const proposeInverterBank: Proposer = (search) => {
  const { study, holds } = search;
  const { kv, z1 } = findPlant(study);
  // Machines are grounded by their own impedances.
  if (z1) return undefined;
  for (const perUnit of bankPerUnits) {
    const bank = sizeGroundBank({ kv, plantKva: projectKva(study.project), x0Pu: perUnit });
    const [xOhm, rOhm] = [bank.x0Ohms, bank.mostR0Ohms];
    const changes: TrialChange[] = [{ kind: 'add-bank', node: study.project.node, rOhm, xOhm }];
    if (!holds(changes)) continue;
    return withRatings(
      search,
      `Add a ground bank of ${ohms(xOhm)} reactance a phase at the point of interconnection.`,
      changes,
      [
        { words: 'Bank, X0 on the plant’s base', value: perUnit, unit: 'pu', source: bankSource },
        { words: 'Bank, X0', value: xOhm, unit: 'Ω', source: bankSource },
        { words: 'Bank, R0', value: rOhm, unit: 'Ω', source: bankSource },
      ],
    );
  }
  return 'A ground bank of 0.54 to 0.66 pu on the plant’s base would still leave it outside.';
};
