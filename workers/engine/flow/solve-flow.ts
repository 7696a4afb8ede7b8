import type { Study } from '../../../shared/schemas/study.ts';
import type { CaseChoice, Model } from '../case.ts';
import { addCutCurrents, closeCuts, findBreakpoints, mostCuts } from './breakpoints.ts';
import type { ControlState, PlacedRegulator } from './flow-controls.ts';
import { moveTaps, placeRegulators, stateOf, switchCapacitors, takeState } from './flow-controls.ts';
import type { FlowNetwork } from './flow-network.ts';
import { traceFlowNetwork } from './flow-network.ts';
import type { Sweeps } from './flow-sweeps.ts';
import { factorSweeps, findBranchCurrents, prepareSweeps, sweep } from './flow-sweeps.ts';
import { findFloating } from './floating-places.ts';
import type { FlowLoad, Injections } from './injections.ts';
import { writeCurrents } from './injections.ts';
import { listInjections, listLoadsWithout } from './list-injections.ts';
import { vectorSize } from './matrix3.ts';
import { followCurves } from './volt-var.ts';

/*
 * Load flow, unbalanced, by phase: currents at the voltages of the last iteration are swept in and give the next voltages
 * (the ladder or backward/forward sweep; W. H. Kersting, Distribution System Modeling and Analysis, chapter 10; value from
 * memory). Sources hold their voltage at their node. Line charging is left out.
 */

export type PreparedFlow = {
  readonly study: Study;
  readonly network: FlowNetwork;
  readonly regulators: readonly PlacedRegulator[];
  /** With and without generators, whose machines are more than what they send. */
  readonly sweeps: (withGeneration: boolean) => Sweeps;
};

export type FlowOptions = {
  load: FlowLoad;
  withGeneration: boolean;
  /** Taps and switched capacitors find their own place, or stay at `start`. */
  controls: 'settle' | 'held';
  start?: ControlState | undefined;
};

export type Flow = {
  readonly network: FlowNetwork;
  /** By place: 6 numbers, per unit of nominal phase voltage. */
  readonly v: Float64Array;
  /** By place: what it takes through its branch at its own end, and at its parent's; per unit of Ibase. */
  readonly currents: { far: Float64Array; near: Float64Array };
  readonly state: ControlState;
  readonly iterations: number;
  /** Largest change of a voltage in the last iteration, or difference at a cut, per unit. */
  readonly mismatchPu: number;
  /** Of all phases, kW and kvar: what sources give, what loads take less what generators send, and what is lost. */
  readonly sources: Power;
  readonly loads: Power;
  readonly losses: Power;
};

export type Power = { kw: number; kvar: number };

/** Why there is no answer, in a sentence. */
export type FlowFailure = { readonly failure: string };

/** Per unit; while taps still move, the voltage need not be known better than a tap changes it. */
const tolerance = 1e-10;
const roughTolerance = 1e-5;
const mostIterations = 200;
const mostRounds = 60;

/** Lays out the network of a case once for all flows in it. */
export function prepareFlow(study: Study, model: Model, choice: CaseChoice): PreparedFlow {
  const network = traceFlowNetwork(study, model, choice);
  const regulators = placeRegulators(study, network);
  const known = new Map<boolean, Sweeps>();
  return {
    study,
    network,
    regulators,
    sweeps: (withGeneration) => {
      let sweeps = known.get(withGeneration);
      if (!sweeps)
        known.set(withGeneration, (sweeps = prepareSweeps(study, network, regulators, withGeneration)));
      return sweeps;
    },
  };
}

/** Solves one flow; a failure names what stands in the way, and never comes with numbers. */
export function solveFlow(prepared: PreparedFlow, options: FlowOptions): Flow | FlowFailure {
  const { study, network, regulators } = prepared;
  if (network.roots.length === 0) return { failure: 'No source feeds the network.' };
  if (network.cuts.length > mostCuts) {
    const { id } = network.cuts[0]!;
    return {
      failure: `It has ${network.cuts.length} loops, ${id} in the first; more than ${mostCuts} are a study of their own.`,
    };
  }
  const lacking = listLoadsWithout(study, options.load);
  if (lacking.length > 0) {
    return { failure: `The minimum of ${lacking.length} loads is not known, of ${lacking[0]} for one.` };
  }
  const sweeps = prepared.sweeps(options.withGeneration);
  const neutral = { taps: new Map(), capacitorsOn: new Set<string>() };
  takeState(regulators, emptyInjections, options.start ?? neutral);
  factorSweeps(sweeps);
  const injections = listInjections(
    study,
    network,
    findFloating(sweeps),
    options.load,
    options.withGeneration,
  );
  if (injections.untied.length > 0) {
    return { failure: `${injections.untied[0]} is tied to a neutral that its place does not have.` };
  }
  return iterate(prepared, sweeps, injections, options);
}

const emptyInjections: Injections = {
  terms: { plus: [], minus: [], p: [], q: [], model: [] },
  balanced: { at: [], p: [], q: [] },
  switched: [],
  following: [],
};

function iterate(
  { network, regulators }: PreparedFlow,
  sweeps: Sweeps,
  injections: Injections,
  { load, controls, start }: FlowOptions,
): Flow | FlowFailure {
  const length = network.parent.length * vectorSize;
  const v = new Float64Array(length);
  const j = new Float64Array(length);
  const last = new Float64Array(length);
  const cutCurrents = new Float64Array(network.cuts.length * vectorSize);
  const capacitorsOn = takeState(regulators, injections, start);
  setSources(network, load, v);
  sweep(sweeps, j, v);
  let iterations = 0;
  let isRough = controls === 'settle' && regulators.length + injections.switched.length > 0;
  for (let round = 0; round < mostRounds; round++) {
    const breakpoints = findBreakpoints(sweeps);
    if (!breakpoints) {
      return { failure: `The current through ${network.cuts[0]!.id} is not determined by impedances.` };
    }
    let mismatchPu = Infinity;
    // What is no number is no match either.
    for (let turn = 0; !(mismatchPu <= (isRough ? roughTolerance : tolerance)); turn++) {
      if (turn === mostIterations || Number.isNaN(mismatchPu))
        return { failure: describeDivergence(iterations) };
      iterations++;
      writeCurrents(injections, v, j);
      addCutCurrents(network, cutCurrents, j);
      last.set(v);
      sweep(sweeps, j, v);
      mismatchPu = largestChange(v, last);
      if (network.cuts.length > 0)
        mismatchPu = Math.max(mismatchPu, closeCuts(network, breakpoints, v, cutCurrents));
      mismatchPu = Math.max(mismatchPu, followCurves(injections, v));
    }
    writeCurrents(injections, v, j);
    const ownCurrents = j.slice();
    addCutCurrents(network, cutCurrents, j);
    const currents = findBranchCurrents(sweeps, j, v);
    const solved = { v, currents, parent: network.parent };
    const moved = controls === 'held' ? [] : moveTaps(regulators, solved);
    const switched = controls === 'held' ? [] : switchCapacitors(injections, v, capacitorsOn);
    if (moved.length + switched.length === 0) {
      if (isRough) {
        isRough = false;
        continue;
      }
      const state = stateOf(regulators, capacitorsOn);
      return {
        network,
        v,
        currents,
        state,
        iterations,
        mismatchPu,
        ...balance(network, v, currents.far, ownCurrents),
      };
    }
    if (round === mostRounds - 1) {
      const id = moved[0]?.given.id ?? switched[0]!.id;
      return { failure: `The controls do not settle: ${id} moves back and forth.` };
    }
    if (moved.length > 0) factorSweeps(sweeps);
  }
  throw new Error('got past the last round, expected an answer by then');
}

function describeDivergence(iterations: number): string {
  return `The load flow does not converge in ${iterations} iterations: the network cannot carry this, or needs a closer study.`;
}

/** Balanced, at the source's own voltage for this load. */
function setSources({ roots }: FlowNetwork, load: FlowLoad, v: Float64Array): void {
  for (const { place, source, clockHours } of roots) {
    const size = (load === 'peak' ? source.peakVoltagePu : source.minimumVoltagePu) ?? 1;
    for (let phase = 0; phase < 3; phase++) {
      const angle = (-Math.PI / 6) * clockHours - ((2 * Math.PI) / 3) * phase;
      v[place * vectorSize + 2 * phase] = size * Math.cos(angle);
      v[place * vectorSize + 2 * phase + 1] = size * Math.sin(angle);
    }
  }
}

function largestChange(v: Float64Array, last: Float64Array): number {
  let largest = 0;
  for (let k = 0; k < v.length; k++) {
    const change = Math.abs(v[k]! - last[k]!);
    // Also where it is not a number, which no comparison finds.
    if (!(change <= largest)) largest = change;
  }
  return largest;
}

function balance(
  { model, roots }: FlowNetwork,
  v: Float64Array,
  far: Float64Array,
  own: Float64Array,
): Pick<Flow, 'sources' | 'loads' | 'losses'> {
  const kvaOfPhase = (model.baseMva * 1000) / 3;
  const sources = { kw: 0, kvar: 0 };
  for (const { place } of roots) addPower(sources, v, far, place * vectorSize, vectorSize, kvaOfPhase);
  const loads = { kw: 0, kvar: 0 };
  addPower(loads, v, own, 0, v.length, -kvaOfPhase);
  return { sources, loads, losses: { kw: sources.kw - loads.kw, kvar: sources.kvar - loads.kvar } };
}

function addPower(
  sum: Power,
  v: Float64Array,
  i: Float64Array,
  from: number,
  length: number,
  factor: number,
): void {
  for (let k = from; k < from + length; k += 2) {
    sum.kw += factor * (v[k]! * i[k]! + v[k + 1]! * i[k + 1]!);
    sum.kvar += factor * (v[k + 1]! * i[k]! - v[k]! * i[k + 1]!);
  }
}

/** Voltage of a node's phase over nominal, null where it is not fed or has no such phase. */
export function voltageAt({ network, v }: Flow, node: number, phase: number): number | null {
  const place = network.placeOf[node]!;
  if (place === -1 || !(network.phases[place]! & (1 << phase))) return null;
  const k = place * vectorSize + 2 * phase;
  return Math.hypot(v[k]!, v[k + 1]!);
}
