import type { Inverter, Load } from '../../../shared/schemas/study.ts';
import type {
  Capacitor,
  Regulator,
  ServiceTransformer,
  Substation,
} from '../../../shared/schemas/study-utility.ts';
import { at } from './plane.ts';
import { makeDice } from './random.ts';
import { spanId } from './spans.ts';
import type { StrungCircuit } from './stringing.ts';
import type { SubstationPlan } from './substations.ts';

/* What stands along the demo's lines besides conductors and devices: regulators, capacitors, service transformers. */

/** Standard sizes of one-phase service transformers, kVA, and what is added for three phases (common practice, no source). */
const onePhaseKva = [15, 25, 37.5, 50, 75, 100, 167, 250];
const threePhaseKva = [45, 75, 112.5, 150, 300, 500, 750, 1000, 1500, 2500];

/** One regulator at each feeder's head; on the long country feeders one more where the first recloser stands. */
export function makeRegulators({ plan, poles }: StrungCircuit): Regulator[] {
  const common = { end: 'from' as const, phases: 'ABC', bandwidthPu: 0.0167, rangePu: 0.1, steps: 16 };
  const head: Regulator = {
    id: `${plan.code}-VR1`,
    branch: spanId(at(poles, 0).id),
    ...common,
    setVoltagePu: plan.code.startsWith('HC') ? 1.03 : 1.04,
    reverse: 'cogeneration',
  };
  const first = poles.find((pole) => pole.recloser?.endsWith('-R1'));
  if (!plan.code.startsWith('HC') || first === undefined) return [head];
  return [
    head,
    { ...head, id: `${plan.code}-VR2`, branch: spanId(first.id), setVoltagePu: 1.025, reverse: 'locked' },
  ];
}

/** A fixed bank two thirds of the way along the mainline: about a fifth of the peak load. */
export function makeCapacitors({ plan, poles }: StrungCircuit): Capacitor[] {
  const mainline = poles.filter((pole) => pole.carries === 'mainline');
  const pole = at(mainline, Math.floor((mainline.length * 2) / 3));
  const kvar = Math.max(150, Math.round(plan.peakKw / 5 / 150) * 150);
  return [{ id: `${plan.code}-C1`, node: pole.id, phases: 'ABC', kvar }];
}

/** The customers' transformer at every pole with load, one or two standard sizes above what they draw. */
export function makeServiceTransformers(
  { plan }: StrungCircuit,
  loads: readonly Load[],
  inverters: readonly Inverter[],
): ServiceTransformer[] {
  const dice = makeDice(plan.seed + 4);
  return loads.map(({ id, node, phases, kw }) => {
    const isThreePhase = phases === 'ABC';
    const sizes = isThreePhase ? threePhaseKva : onePhaseKva;
    const needed = sizes.findIndex((size) => size >= kw * 1.1);
    const kva =
      sizes[Math.min(sizes.length - 1, (needed === -1 ? sizes.length - 1 : needed) + dice.whole(0, 1))]!;
    return {
      id: id.replace('-D', '-ST'),
      node,
      kva,
      phases: isThreePhase ? 'ABC' : phases.slice(0, 1),
      secondaryV: isThreePhase ? 480 : 240,
      ...(!isThreePhase && { centreTapped: true, shared: dice.chance(0.7) }),
      impedancePercent: isThreePhase ? 4.5 : 2.2,
      xr: isThreePhase ? 4 : 1.6,
      generationKw: inverters.reduce((sum, unit) => (unit.node === node ? sum + unit.kva : sum), 0),
      ...(!isThreePhase && { usualDrop: { r: 0.022, x: 0.009 } }),
    };
  });
}

/** The bank of a substation and what is known behind it. */
export function describeSubstation(
  { code, highKv, bank, guardsHighSide }: SubstationPlan,
  loads: readonly Load[],
): Substation {
  const total = (of: (load: Load) => number) => Math.round(loads.reduce((sum, load) => sum + of(load), 0));
  return {
    id: `${code}-SUBSTATION`,
    transformer: `${code}-T1`,
    connection: 'Dyn1',
    kva: bank.kva,
    highSideKv: highKv,
    peakKw: total(({ kw }) => kw),
    minimumKw: total(({ minimumKw }) => minimumKw ?? 0),
    zeroSequenceVoltageProtection: guardsHighSide,
    reverseFlow: guardsHighSide,
    stabilityLimited: false,
    transmissionSideKw: 0,
  };
}
