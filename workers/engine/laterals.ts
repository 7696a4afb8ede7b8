import type { Model, PhaseTriple } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { add, addAt, at, complexArray, multiply, sum } from './complex.ts';
import type { Topology } from './topology.ts';

/*
 * Laterals are trees, and a spot's phases are phases of every segment between it and the tap. So the path to a spot
 * adds one self and one mutual impedance per segment, and the currents of its inverters are swept from the leaves in.
 */

export type PhaseArrays = readonly [ComplexArray, ComplexArray, ComplexArray];

export type LateralPaths = { readonly self: ComplexArray; readonly mutual: ComplexArray };

/** Adds up the impedance between the tap and each spot. */
export function addUpPaths(model: Model, { laterals }: Topology): LateralPaths {
  const count = laterals.tap.length;
  const self = complexArray(count);
  const mutual = complexArray(count);
  for (let spot = 0; spot < count; spot++) {
    const parent = laterals.parent[spot]!;
    const branch = model.branches[laterals.branch[spot]!];
    if (parent !== -1) {
      addAt(self, spot, at(self, parent));
      addAt(mutual, spot, at(mutual, parent));
    }
    if (branch) {
      addAt(self, spot, branch.self);
      addAt(mutual, spot, branch.mutual);
    }
  }
  return { self, mutual };
}

export function phaseArrays(count: number): PhaseArrays {
  return [complexArray(count), complexArray(count), complexArray(count)];
}

export function phasesAt(arrays: PhaseArrays, index: number): PhaseTriple {
  return [at(arrays[0], index), at(arrays[1], index), at(arrays[2], index)];
}

export function addPhasesAt(arrays: PhaseArrays, index: number, values: PhaseTriple): void {
  values.forEach((value, phase) => addAt(arrays[phase]!, index, value));
}

/** Turns what is sent out at each spot into what flows from it towards the tap, and gives the taps their share. */
export function sweepCurrentsToTaps({ laterals }: Topology, flow: PhaseArrays, atBus: PhaseArrays): void {
  for (let spot = laterals.tap.length - 1; spot >= 0; spot--) {
    const parent = laterals.parent[spot]!;
    if (parent === -1) addPhasesAt(atBus, laterals.tap[spot]!, phasesAt(flow, spot));
    else addPhasesAt(flow, parent, phasesAt(flow, spot));
  }
}

/** Gives the voltage of each spot: the tap's, raised along the path by self·I + mutual·(currents of the other phases). */
export function sweepVoltagesFromTaps(
  model: Model,
  { laterals }: Topology,
  flow: PhaseArrays,
  voltageAtBus: (bus: number) => PhaseTriple,
): PhaseArrays {
  const voltage = phaseArrays(laterals.tap.length);
  for (let spot = 0; spot < laterals.tap.length; spot++) {
    const parent = laterals.parent[spot]!;
    addPhasesAt(voltage, spot, parent === -1 ? voltageAtBus(laterals.tap[spot]!) : phasesAt(voltage, parent));
    const branch = model.branches[laterals.branch[spot]!];
    if (branch) addPhasesAt(voltage, spot, voltageRise(branch, phasesAt(flow, spot)));
  }
  return voltage;
}

function voltageRise(
  { self, mutual }: { self: Complex; mutual: Complex },
  currents: PhaseTriple,
): PhaseTriple {
  const all = multiply(mutual, sum(...currents));
  const ownBeyondMutual = { re: self.re - mutual.re, im: self.im - mutual.im };
  const rise = (current: Complex) => add(all, multiply(ownBeyondMutual, current));
  return [rise(currents[0]), rise(currents[1]), rise(currents[2])];
}
