import type { Feeder, Inverter, Machine, Project } from '../schemas/study.ts';
import type { ServiceTie, ServiceTransformer } from '../schemas/study-utility.ts';

/** From here on a one-phase unit stands across both halves of a 120/240 V service. */
const acrossBothHalvesV = 200;

/**
 * Ties each one-phase unit of a project to the service transformer at its place, where the utility's records have exactly
 * one for its phase: an applicant does not know it. What a unit says by itself stays.
 */
export function tieServices(feeder: Feeder, project: Project): Project {
  const { machines, inverters } = project;
  return {
    ...project,
    ...(machines && { machines: machines.map((machine) => tie(feeder, project, machine, 'ABC')) }),
    ...(inverters && {
      inverters: inverters.map((inverter) => tie(feeder, project, inverter, inverter.phases)),
    }),
  };
}

function tie<T extends Inverter | Machine>(feeder: Feeder, project: Project, unit: T, phases: string): T {
  if (unit.service !== undefined || phases.length !== 1) return unit;
  const [transformer, other] = (feeder.serviceTransformers ?? []).filter(
    ({ node, phases: served = phases }) => node === unit.node && served === phases,
  );
  if (transformer === undefined || other !== undefined) return unit;
  return { ...unit, service: makeTie(transformer, project, unit) };
}

function makeTie(transformer: ServiceTransformer, project: Project, unit: Inverter | Machine): ServiceTie {
  const { panelInterruptingKa } = project;
  return {
    transformer: transformer.id,
    ...(transformer.centreTapped && divide(unit)),
    ...(transformer.usualDrop && { drop: transformer.usualDrop }),
    ...(panelInterruptingKa !== undefined && { panelInterruptingKa }),
  };
}

/** What goes to each half: nothing is said where the unit's voltage is not known. */
function divide({ kva, ratedKv }: Inverter | Machine): Pick<ServiceTie, 'firstHalfKw' | 'secondHalfKw'> {
  if (ratedKv === undefined) return {};
  const isAcrossBoth = (ratedKv * 1000) / Math.sqrt(3) >= acrossBothHalvesV;
  return isAcrossBoth
    ? { firstHalfKw: kva / 2, secondHalfKw: kva / 2 }
    : { firstHalfKw: kva, secondHalfKw: 0 };
}
