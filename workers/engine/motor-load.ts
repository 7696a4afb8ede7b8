import type { Load, Machine, Study } from '../../shared/schemas/study.ts';

/*
 * Motors in the load feed a fault in its first cycle, about as much as they draw with their rotors locked, and are gone
 * after a few. Only the duty of devices counts them, and only where a study asks for it (IEEE C37.010, C37.13; common
 * practice; that they give 5 to 10 times their current is from P. P. Barker, R. W. de Mello, 2000; value from memory).
 */

/** Six times the rated current. */
const usualLockedRotorPu = 1 / 6;

/** Gives the study with an induction machine for the motor share of each load, of the load's kVA times that share. */
export function addMotorLoads(study: Study): Study {
  const extend = <P extends { machines?: Machine[]; loads?: Load[] }>(part: P): P => ({
    ...part,
    machines: [...(part.machines ?? []), ...(part.loads ?? []).flatMap(motorOf)],
  });
  return {
    ...study,
    feeder: extend(study.feeder),
    ...(study.project && { project: extend(study.project) }),
  };
}

/** Id of the machine that stands for the motors of a load. */
export function motorIdOf(load: string): string {
  return `motors of ${load}`;
}

function motorOf(load: Load): Machine[] {
  const kva = (load.motorFraction ?? 0) * Math.hypot(load.kw, load.kvar);
  if (kva === 0) return [];
  const motor: Machine = {
    id: motorIdOf(load.id),
    node: load.node,
    kind: 'induction',
    kva,
    xSubtransientPu: load.motorLockedRotorPu ?? usualLockedRotorPu,
  };
  // A load that came with a generator is absent together with it.
  return [load.with === undefined ? motor : { ...motor, ...{ with: load.with } }];
}
