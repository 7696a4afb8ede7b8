import type { Inverter, Machine, Study } from '../../../shared/schemas/study.ts';
import type { SolvedCase } from '../solve-case.ts';

/* What each generator gives by itself, as a sheet of its maker has it: no network between it and the fault. */

export type OwnCurrent = { id: string; kva: number; perUnit: number; amps: number };

/**
 * Lists the own currents of all generators that are in, in A at `kv`: kVA/(√3·kV) times `faultCurrentPu` of an inverter, and
 * E/|r + jX''| of a machine.
 * Example: 2,000 kVA at X'' = 0.2 and 12.47 kV: 92.6 A times 5.
 */
export function listOwnCurrents(study: Study, { choice }: SolvedCase, kv: number): OwnCurrent[] {
  const lists = [study.feeder, ...(choice.project && study.project ? [study.project] : [])];
  const own = (generator: Inverter | Machine, perUnit: number): OwnCurrent => ({
    id: generator.id,
    kva: generator.kva,
    perUnit,
    amps: (generator.kva / (Math.sqrt(3) * kv)) * perUnit,
  });
  return lists
    .flatMap(({ machines = [], inverters = [] }) => [
      ...machines.map((machine) =>
        own(machine, choice.prefaultFactor / Math.hypot(machine.rPu ?? 0, machine.xSubtransientPu)),
      ),
      ...inverters.map((inverter) => own(inverter, inverter.faultCurrentPu)),
    ])
    .filter(({ id }) => !choice.out?.has(id));
}
