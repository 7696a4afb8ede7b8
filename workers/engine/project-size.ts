import type { Project } from '../../shared/schemas/study.ts';

/** Nameplate of a project's generators in kVA. */
export function projectKva({ machines = [], inverters = [] }: Project): number {
  return [...machines, ...inverters].reduce((total, generator) => total + generator.kva, 0);
}
