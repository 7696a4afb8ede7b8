import type { Regulator } from '../../../shared/schemas/study-utility.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { isPresent } from '../case.ts';
import { nodeAt } from '../model-parts.ts';
import { baseOhms, phaseSet } from '../per-unit.ts';
import type { FlowNetwork } from './flow-network.ts';
import type { PlacedRatio } from './flow-sweeps.ts';
import type { Injections, SwitchedCapacitor } from './injections.ts';
import { vectorSize } from './matrix3.ts';
import { isReversed } from './two-ports.ts';

/* What moves by itself between two flows: taps of regulators, capacitors that the voltage switches. */

/** Range and number of steps to each side of a step-voltage regulator unless given: ±10 % in 16 steps (common practice). */
const usualRangePu = 0.1;
export const usualSteps = 16;

/** Taps by regulator and phase, in steps from the middle, and the switched capacitors that are on. */
export type ControlState = {
  readonly taps: ReadonlyMap<string, readonly number[]>;
  readonly capacitorsOn: ReadonlySet<string>;
};

export type PlacedRegulator = PlacedRatio & {
  readonly given: Regulator;
  readonly phases: number;
  readonly taps: number[];
  readonly stepPu: number;
  readonly steps: number;
  readonly compensation: { re: number; im: number };
  /** Regulators between this one and the source, which move first. */
  readonly before: PlacedRegulator[];
};

/** Finds the regulators that are in service, each at the place beyond it. */
export function placeRegulators(study: Study, network: FlowNetwork): PlacedRegulator[] {
  const { model, choice, branch, parent, nodeOf } = network;
  const regulators = study.feeder.regulators ?? [];
  if (regulators.length === 0) return [];
  const placeOfBranch = new Map<number, number>();
  branch.forEach((index, place) => index !== -1 && placeOfBranch.set(index, place));
  const placed = regulators.flatMap((given): PlacedRegulator[] => {
    const place = placeOfBranch.get(model.branchIndex.get(given.branch) ?? -1);
    if (place === undefined || !isPresent(choice, { id: given.id, ofProject: false, companion: false }))
      return [];
    const steps = given.steps ?? usualSteps;
    const ohms = baseOhms(model.baseMva, nodeAt(model, nodeOf[place]!).kv);
    const { r = 0, x = 0 } = given.compensation ?? {};
    return [
      {
        given,
        place,
        isFar: given.end === (isReversed(network, place) ? 'from' : 'to'),
        ratio: new Float64Array(3).fill(1),
        phases: phaseSet(given.phases) & network.phases[place]!,
        taps: [0, 0, 0],
        stepPu: (given.rangePu ?? usualRangePu) / steps,
        steps,
        compensation: { re: r / ohms, im: x / ohms },
        before: [],
      },
    ];
  });
  const at = new Map(placed.map((regulator) => [regulator.place, regulator]));
  for (const regulator of placed) {
    for (let place = parent[regulator.place]!; place !== -1; place = parent[place]!) {
      const other = at.get(place);
      if (other) regulator.before.push(other);
    }
  }
  return placed;
}

/** Puts taps and capacitors where a state has them; regulators that it does not name stand in the middle. */
export function takeState(
  regulators: readonly PlacedRegulator[],
  injections: Injections,
  state: ControlState | undefined,
): Set<string> {
  for (const { given, taps, ratio, stepPu } of regulators) {
    for (let phase = 0; phase < 3; phase++) {
      taps[phase] = state?.taps.get(given.id)?.[phase] ?? 0;
      ratio[phase] = 1 + taps[phase]! * stepPu;
    }
  }
  const on = new Set<string>();
  for (const capacitor of injections.switched) {
    if (!state?.capacitorsOn.has(capacitor.id)) continue;
    on.add(capacitor.id);
    setCapacitor(injections, capacitor, true);
  }
  return on;
}

export function stateOf(
  regulators: readonly PlacedRegulator[],
  capacitorsOn: ReadonlySet<string>,
): ControlState {
  return {
    taps: new Map(regulators.map(({ given, taps }) => [given.id, [...taps]])),
    capacitorsOn: new Set(capacitorsOn),
  };
}

type Solved = { v: Float64Array; currents: { far: Float64Array; near: Float64Array }; parent: Int32Array };

/**
 * Moves every regulator whose voltage is out of its band to the first tap that brings it back, those nearest the source
 * first; gives those that moved. Where power flows back a locked one stays, and a bidirectional one tries to hold the
 * side towards the source, as its control takes it that the source is now beyond: what it cannot hold drives it to its end.
 */
export function moveTaps(regulators: readonly PlacedRegulator[], solved: Solved): PlacedRegulator[] {
  const moved = new Set<PlacedRegulator>();
  for (const regulator of [...regulators].sort((p, q) => p.before.length - q.before.length)) {
    if (regulator.before.some((other) => moved.has(other))) continue;
    for (let phase = 0; phase < 3; phase++) {
      if (!(regulator.phases & (1 << phase))) continue;
      const wanted = wantedTap(regulator, phase, solved);
      const tap = Math.max(-regulator.steps, Math.min(regulator.steps, wanted));
      if (tap === regulator.taps[phase]) continue;
      regulator.taps[phase] = tap;
      regulator.ratio[phase] = 1 + tap * regulator.stepPu;
      moved.add(regulator);
    }
  }
  return [...moved];
}

function wantedTap(regulator: PlacedRegulator, phase: number, { v, currents, parent }: Solved): number {
  const { given, place, isFar, ratio, taps, stepPu, compensation } = regulator;
  const k = place * vectorSize + 2 * phase;
  const turns = ratio[phase]!;
  const up = parent[place]! * vectorSize + 2 * phase;
  // Far: what is regulated is the place itself. Near: the parent's voltage, raised.
  const [re, im] = isFar ? [v[k]!, v[k + 1]!] : [v[up]! * turns, v[up + 1]! * turns];
  const [iRe, iIm] = isFar
    ? [currents.far[k]!, currents.far[k + 1]!]
    : [currents.near[k]! / turns, currents.near[k + 1]! / turns];
  const isBack = re * iRe + im * iIm < -1e-9;
  if (isBack && (given.reverse ?? 'locked') === 'locked') return taps[phase]!;
  const isReverse = isBack && given.reverse === 'bidirectional';
  const held = isReverse
    ? Math.hypot(re, im) / turns
    : Math.hypot(
        re - compensation.re * iRe + compensation.im * iIm,
        im - compensation.re * iIm - compensation.im * iRe,
      );
  const [low, high] = [
    given.setVoltagePu - given.bandwidthPu / 2,
    given.setVoltagePu + given.bandwidthPu / 2,
  ];
  const steps =
    held < low ? Math.ceil((low - held) / stepPu) : held > high ? -Math.ceil((held - high) / stepPu) : 0;
  return taps[phase]! + (isReverse ? -steps : steps);
}

/** Switches capacitors by the mean voltage of their phases; gives those that changed. */
export function switchCapacitors(
  injections: Injections,
  v: Float64Array,
  on: Set<string>,
): SwitchedCapacitor[] {
  return injections.switched.filter((capacitor) => {
    const volts = voltageOf(injections, capacitor, v);
    const isOn = on.has(capacitor.id);
    if (isOn ? volts <= capacitor.off : volts >= capacitor.on) return false;
    setCapacitor(injections, capacitor, !isOn);
    if (isOn) on.delete(capacitor.id);
    else on.add(capacitor.id);
    return true;
  });
}

function setCapacitor({ terms }: Injections, { first, count, q }: SwitchedCapacitor, isOn: boolean): void {
  terms.q.fill(isOn ? q : 0, first, first + count);
}

function voltageOf({ terms }: Injections, { first, count }: SwitchedCapacitor, v: Float64Array): number {
  let sum = 0;
  for (let k = first; k < first + count; k++) {
    const [a, b] = [terms.plus[k]!, terms.minus[k]!];
    const re = v[a]! - (b === -1 ? 0 : v[b]!);
    const im = v[a + 1]! - (b === -1 ? 0 : v[b + 1]!);
    sum += Math.hypot(re, im) / (b === -1 ? 1 : Math.sqrt(3));
  }
  return sum / count;
}
