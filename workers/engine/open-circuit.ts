import type { CaseChoice, Model, PhaseTriple } from './case.ts';
import { allPhases, isMember, isPresent, phaseA, phaseB, phaseC } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { a, a2, addAt, at, complexArray, multiply, polar, scale, sum } from './complex.ts';
import { solveInPlace } from './factorization.ts';
import type { PhaseArrays } from './laterals.ts';
import {
  addPhasesAt,
  phaseArrays,
  phasesAt,
  sweepCurrentsToTaps,
  sweepVoltagesFromTaps,
} from './laterals.ts';
import type { SequenceNetwork, SequenceNetworks } from './sequence-networks.ts';
import type { Topology } from './topology.ts';

/*
 * Voltages before the fault, from superposition: Vo(s) = E·[s = 1] + Z(s)·I(s) for the currents I of all inverters.
 * An inverter is a constant current at the fault (so treats IEC 60909-0:2016 full-converter units; value from memory).
 */

export type OpenCircuit = {
  /** Sequence voltages by bus, local. */
  readonly v1: ComplexArray;
  readonly v2: ComplexArray;
  readonly v0: ComplexArray;
  /** Phase voltages by spot, local. */
  readonly spotVoltage: PhaseArrays;
  /** Inverter current that flows from each spot, and from all beyond it, towards the tap. */
  readonly spotFlow: PhaseArrays;
  /** Whether v2 and v0 are zero everywhere. */
  readonly balanced: boolean;
  /** Nodes of one-phase inverters whose current has no way back: they are left out. */
  readonly strandedInverters: readonly number[];
};

/** Va, Vb, Vc of sequence values: Va = V0 + V1 + V2, Vb = V0 + a²·V1 + a·V2, Vc = V0 + a·V1 + a²·V2. */
export function phasesOf(v1: Complex, v2: Complex, v0: Complex): PhaseTriple {
  return [
    sum(v0, v1, v2),
    sum(v0, multiply(a2, v1), multiply(a, v2)),
    sum(v0, multiply(a, v1), multiply(a2, v2)),
  ];
}

/** The inverse of `phasesOf`: I1 = (Ia + a·Ib + a²·Ic)/3 and so on. */
export function sequencesOf([ia, ib, ic]: PhaseTriple): { i1: Complex; i2: Complex; i0: Complex } {
  return {
    i1: scale(sum(ia, multiply(a, ib), multiply(a2, ic)), 1 / 3),
    i2: scale(sum(ia, multiply(a2, ib), multiply(a, ic)), 1 / 3),
    i0: scale(sum(ia, ib, ic), 1 / 3),
  };
}

/*
 * Shifts turn the negative sequence the other way. Seen from each bus's own positive-sequence voltage, which lags by
 * 30°·hour, a negative-sequence value is therefore off by twice that angle between buses.
 */
export function negativeTurn(clockHours: number): Complex {
  return polar(1, -60 * clockHours);
}

/** Solves the voltages before the fault at every bus and spot of a case. */
export function solveOpenCircuit(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  networks: SequenceNetworks,
): OpenCircuit {
  const { busCount, clockHours, laterals } = topology;
  const atBus = phaseArrays(busCount);
  const spotFlow = phaseArrays(laterals.tap.length);
  const { strandedInverters, anyInverter, balanced } = injectInverters();
  sweepCurrentsToTaps(topology, spotFlow, atBus);

  const v1 = complexArray(busCount);
  const v2 = complexArray(busCount);
  const v0 = complexArray(busCount);
  if (anyInverter) solveRise();
  networks.positive.hasPath.forEach((path, bus) => {
    if (path) v1.re[bus]! += choice.prefaultFactor;
  });
  const voltageAtBus = (bus: number) => phasesOf(at(v1, bus), at(v2, bus), at(v0, bus));
  const spotVoltage = sweepVoltagesFromTaps(model, topology, spotFlow, voltageAtBus);
  return { v1, v2, v0, spotVoltage, spotFlow, balanced, strandedInverters };

  function injectInverters() {
    const stranded: number[] = [];
    let anyTakesPart = false;
    let allThreePhase = true;
    for (const inverter of model.inverters) {
      if (!isMember(choice.inverters, inverter.ofProject) || !isPresent(choice, inverter)) continue;
      const spot = topology.laterals.spotOf[inverter.node]!;
      const bus = spot === -1 ? topology.busOf[inverter.node]! : laterals.tap[spot]!;
      if (bus === -1 || !networks.positive.hasPath[bus]) continue;
      const isOnePhase = [phaseA, phaseB, phaseC].includes(inverter.phases);
      if (isOnePhase && !networks.zero.hasPath[bus]) {
        stranded.push(inverter.node);
        continue;
      }
      anyTakesPart = true;
      if (inverter.phases !== allPhases) allThreePhase = false;
      if (spot === -1) addPhasesAt(atBus, bus, inverter.currents);
      else addPhasesAt(spotFlow, spot, inverter.currents);
    }
    return { strandedInverters: stranded, anyInverter: anyTakesPart, balanced: allThreePhase };
  }

  function solveRise(): void {
    for (let bus = 0; bus < busCount; bus++) {
      const { i1, i2, i0 } = sequencesOf(phasesAt(atBus, bus));
      addAt(v1, bus, i1);
      addAt(v2, bus, multiply(i2, negativeTurn(clockHours[bus]!)));
      addAt(v0, bus, i0);
    }
    solveWherePath(networks.positive, v1);
    if (balanced) {
      // What is left of 1 + a + a² in floating point is not a voltage.
      for (const { re, im } of [v2, v0]) {
        re.fill(0);
        im.fill(0);
      }
      return;
    }
    solveWherePath(networks.negative, v2);
    solveWherePath(networks.zero, v0);
    for (let bus = 0; bus < busCount; bus++) {
      const v = multiply(at(v2, bus), negativeTurn(-clockHours[bus]!));
      v2.re[bus] = v.re;
      v2.im[bus] = v.im;
    }
  }
}

function solveWherePath({ inverse, hasPath }: SequenceNetwork, values: ComplexArray): void {
  hasPath.forEach((path, bus) => {
    if (!path) values.re[bus] = values.im[bus] = 0;
  });
  solveInPlace(inverse.factors, values);
}
