import type { Inverter } from '../../shared/schemas/study.ts';
import type { PhaseTriple } from './case.ts';
import { allPhases, phaseA, phaseB, phaseC } from './case.ts';
import { polar, zero } from './complex.ts';
import { phaseSet } from './per-unit.ts';

/**
 * The limited current of an inverter, phase by phase: three-phase kVA/(√3·kV), one-phase kVA/(kV/√3), two-phase kVA/kV out
 * of one phase and back into the other, each at its angle from the voltage it is made with. Per unit of Ibase these
 * are S, 3·S and √3·S with S = kVA/base.
 */
export function inverterCurrents(inverter: Inverter, baseMva: number): PhaseTriple {
  const size = (inverter.faultCurrentPu * inverter.kva) / (baseMva * 1000);
  const angle = inverter.faultAngleDeg ?? -90;
  const phases = phaseSet(inverter.phases);
  if (phases === allPhases) return [polar(size, angle), polar(size, angle - 120), polar(size, angle + 120)];
  const one = polar(3 * size, angle);
  const out = (degrees: number) => polar(Math.sqrt(3) * size, angle + degrees);
  const back = (degrees: number) => out(degrees + 180);
  switch (phases) {
    case phaseA:
      return [one, zero, zero];
    case phaseB:
      return [zero, polar(3 * size, angle - 120), zero];
    case phaseC:
      return [zero, zero, polar(3 * size, angle + 120)];
    case phaseA | phaseB:
      return [out(30), back(30), zero];
    case phaseB | phaseC:
      return [zero, out(-90), back(-90)];
    default:
      return [back(150), zero, out(150)];
  }
}
