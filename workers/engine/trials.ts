import type { Finding } from '../../shared/schemas/findings.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { TrialChange, TrialParts } from '../../shared/schemas/trials.ts';
import { makeScreening, type ProjectStudy } from './findings/make-screening.ts';
import { answerQuestions } from './findings/questions.ts';
import { listNotFinite } from './finite-result.ts';
import { Problems } from './problems.ts';
import { projectKva } from './project-size.ts';
import { checkStudy } from './read-study.ts';
import { applyChange, ChangeProblem } from './trial-changes.ts';

/* Trials: a study with a few things changed, and what the findings would then be. */

/**
 * Makes the changes, one after the other, and checks the whole as if it had been handed in. A change that names what is not
 * there says so at /changes/<place>/<field>; what does not hold together afterwards says so where it is in the study.
 */
export function applyChanges(
  study: ProjectStudy,
  changes: readonly TrialChange[],
): { study: ProjectStudy } | { problems: Problems } {
  const problems = new Problems();
  let changed = study;
  changes.forEach((change, index) => {
    try {
      changed = applyChange(changed, change);
    } catch (error) {
      if (!(error instanceof ChangeProblem)) throw error;
      const { field, got, expected } = error;
      problems.push({ pointer: `/changes/${index}/${field}`, got, expected });
    }
  });
  if (problems.length > 0) return { problems };
  const checked = checkStudy(changed);
  return 'problems' in checked ? checked : { study: changed };
}

/** Gives the findings of a checked study, as a run of it would; or what in them is no number. */
export function screenStudy(
  study: ProjectStudy,
  ruleSet: RuleSet,
): { findings: Finding[] } | { problems: Problems } {
  const answered = answerQuestions(makeScreening(study, ruleSet));
  const findings = answered.map(({ working: _, ...finding }) => finding);
  const problems = listNotFinite(findings);
  return problems.length > 0 ? { problems } : { findings };
}

/** Tries changes on a checked study. */
export function tryChanges(
  study: ProjectStudy,
  changes: readonly TrialChange[],
  ruleSet: RuleSet,
): { findings: Finding[] } | { problems: Problems } {
  const applied = applyChanges(study, changes);
  return 'problems' in applied ? applied : screenStudy(applied.study, ruleSet);
}

/** Lists what a trial of a study may name. */
export function listTrialParts({ feeder, project }: ProjectStudy): TrialParts {
  const kvOf = new Map([...feeder.nodes, ...(project.nodes ?? [])].map(({ id, kv }) => [id, kv]));
  const generators = [...(project.machines ?? []), ...(project.inverters ?? [])];
  const isLimited = generators.some(({ exportKw }) => exportKw !== undefined);
  const exportKw = generators.reduce((total, each) => total + (each.exportKw ?? each.kva), 0);
  const banks = [...(project.groundingBanks ?? []), ...(feeder.groundingBanks ?? [])];
  const devices = [...(project.devices ?? []), ...(feeder.devices ?? [])];
  return {
    project: { kva: projectKva(project), exportKw: isLimited ? exportKw : null },
    transformers: (project.transformers ?? []).map(({ id, kva, connection, impedancePercent }) => ({
      id,
      kva,
      connection,
      impedancePercent,
    })),
    machines: (project.machines ?? []).map(({ id, kind, kva }) => ({ id, kind, kva })),
    inverters: (project.inverters ?? []).map(({ id, kva, faultCurrentPu }) => ({ id, kva, faultCurrentPu })),
    banks: banks.map(({ id, node, z0 }) => ({ id, node, rOhm: z0.r, xOhm: z0.x })),
    nodes: [project.node, ...(project.nodes ?? []).map(({ id }) => id)].map((id) => ({
      id,
      kv: kvOf.get(id)!,
    })),
    devices: devices.map(({ id, kind, interruptingKa, phasePickupA, groundPickupA }) => ({
      id,
      kind,
      interruptingKa: interruptingKa ?? null,
      phasePickupA: phasePickupA ?? null,
      groundPickupA: groundPickupA ?? null,
    })),
  };
}
