import type { CaseChoice, CurrentSource, Model, PhaseTriple } from './case.ts';
import { allPhases, isMember, isPresent, phaseA, phaseB, phaseC } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { a, a2, addAt, multiply, polar, scale } from './complex.ts';
import type { PhaseArrays } from './laterals.ts';
import { addPhasesAt, phaseArrays, sweepCurrentsToTaps, sweepVoltagesFromTaps } from './laterals.ts';
import type { SequenceNetworks } from './sequence-networks.ts';
import { solveVoltages } from './sequence-networks.ts';
import type { Topology } from './topology.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

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
    { re: v0.re + v1.re + v2.re, im: v0.im + v1.im + v2.im },
    addTurned(v0, a2, v1, a, v2),
    addTurned(v0, a, v1, a2, v2),
  ];
}

/** p + turnQ·q + turnR·r, with a single object made, since devices ask for many. */
function addTurned(p: Complex, turnQ: Complex, q: Complex, turnR: Complex, r: Complex): Complex {
  return {
    re: p.re + (turnQ.re * q.re - turnQ.im * q.im) + (turnR.re * r.re - turnR.im * r.im),
    im: p.im + (turnQ.re * q.im + turnQ.im * q.re) + (turnR.re * r.im + turnR.im * r.re),
  };
}

/** The inverse of `phasesOf`: I1 = (Ia + a·Ib + a²·Ic)/3 and so on. */
export function sequencesOf([ia, ib, ic]: PhaseTriple): { i1: Complex; i2: Complex; i0: Complex } {
  return {
    i1: scale(addTurned(ia, a, ib, a2, ic), 1 / 3),
    i2: scale(addTurned(ia, a2, ib, a, ic), 1 / 3),
    i0: { re: (ia.re + ib.re + ic.re) * (1 / 3), im: (ia.im + ib.im + ic.im) * (1 / 3) },
  };
}

/*
 * Shifts turn the negative sequence the other way. Seen from each bus's own positive-sequence voltage, which lags by
 * 30°·hour, a negative-sequence value is therefore off by twice that angle between buses.
 */
const turns = [0, 1, 2, 3, 4, 5].map((hours) => polar(1, -60 * hours));

export function negativeTurn(clockHours: number): Complex {
  return turns[((clockHours % 6) + 6) % 6]!;
}

/** Solves the voltages before the fault at every bus and spot of a case: one sweep for all inverters together. */
export function solveOpenCircuit(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  networks: SequenceNetworks,
  arrays: Arrays = newArrays,
): OpenCircuit {
  const { busCount, laterals } = topology;
  const { taking, stranded } = chooseInverters(model, choice, topology, networks);
  const balanced = taking.every(({ phases }) => phases === allPhases);
  // Where a voltage is zero everywhere, one array of zeros serves for all.
  const nothing = () => ({ re: arrays.zeros(busCount), im: arrays.zeros(busCount) });
  const v1 = {
    re: arrays.floats(busCount),
    im: taking.length > 0 ? arrays.floats(busCount) : arrays.zeros(busCount),
  };
  const v2 = balanced ? nothing() : arrays.complex(busCount);
  const v0 = balanced ? v2 : arrays.complex(busCount);
  const spotFlow = phaseArrays(laterals.tap.length);
  if (taking.length > 0) {
    injectCurrents();
    solveVoltages(networks.positive, v1);
    if (!balanced) solveUnbalance();
  }
  const { hasPath } = networks.positive;
  for (let bus = 0; bus < busCount; bus++) if (hasPath[bus]) v1.re[bus]! += choice.prefaultFactor;
  const spotVoltage = sweepVoltagesFromTaps(model, topology, spotFlow, { v1, v2, v0 });
  return { v1, v2, v0, spotVoltage, spotFlow, balanced, strandedInverters: stranded };

  /** Leaves v2 and v0 at zero where all is balanced: what is left of 1 + a + a² in floating point is not a current. */
  function injectCurrents(): void {
    const inject = (bus: number, currents: PhaseTriple) => {
      const { i1, i2, i0 } = sequencesOf(currents);
      addAt(v1, bus, i1);
      if (balanced) return;
      addAt(v2, bus, multiply(i2, negativeTurn(topology.clockHours[bus]!)));
      addAt(v0, bus, i0);
    };
    for (const { node, currents } of taking) {
      const spot = laterals.spotOf[node]!;
      if (spot === -1) inject(topology.busOf[node]!, currents);
      else addPhasesAt(spotFlow, spot, currents);
    }
    if (!balanced) sweepCurrentsToTaps(topology, spotFlow, inject);
  }

  function solveUnbalance(): void {
    solveVoltages(networks.negative, v2);
    solveVoltages(networks.zero, v0);
    for (let bus = 0; bus < busCount; bus++) {
      const hours = topology.clockHours[bus]!;
      if (hours % 6 === 0) continue;
      const { re, im } = negativeTurn(-hours);
      const v2Re = v2.re[bus]!;
      const v2Im = v2.im[bus]!;
      v2.re[bus] = re * v2Re - im * v2Im;
      v2.im[bus] = re * v2Im + im * v2Re;
    }
  }
}

/** Lists the inverters that send current, and the nodes of those that cannot. */
function chooseInverters(
  model: Model,
  choice: CaseChoice,
  { busOf, laterals }: Topology,
  networks: SequenceNetworks,
): { taking: CurrentSource[]; stranded: number[] } {
  const taking: CurrentSource[] = [];
  const stranded: number[] = [];
  for (const inverter of model.inverters) {
    if (!isMember(choice.inverters, inverter.ofProject) || !isPresent(choice, inverter)) continue;
    const spot = laterals.spotOf[inverter.node]!;
    const bus = spot === -1 ? busOf[inverter.node]! : laterals.tap[spot]!;
    if (bus === -1 || !networks.positive.hasPath[bus]) continue;
    const isOnePhase = [phaseA, phaseB, phaseC].includes(inverter.phases);
    if (isOnePhase && !networks.zero.hasPath[bus]) stranded.push(inverter.node);
    else taking.push(inverter);
  }
  return { taking, stranded };
}
