import type { Study } from '../../../shared/schemas/study.ts';
import { branchAt } from '../model-parts.ts';
import type { FlowNetwork } from './flow-network.ts';
import { addProduct, invertMatrix, matrixSize, multiplyMatrices, vectorSize } from './matrix3.ts';
import type { TwoPort } from './two-ports.ts';
import {
  addRegulator,
  emptyTwoPort,
  floatsBeyond,
  isReversed,
  layOutLines,
  listShunts,
  writeLine,
  writeTransformer,
} from './two-ports.ts';

/*
 * The linear part of a load flow: given currents into the places, the voltages of all. What lies beyond a place takes
 * Y·V − J; a branch V = A·Vp − B·I then gives V = M·(A·Vp + B·J) with M = 1/(1 + B·Y), and its near end takes
 * (C + D·Y·M·A)·Vp − D·(1 − Y·M·B)·J. Currents go from the leaves in, voltages from the sources out. Most places have
 * Y = 0 and a line: J goes on as it is, and V = Vp + Z·J.
 */

/** A regulator on the way to a place, with the ratio that its taps make in each phase. */
export type PlacedRatio = { readonly place: number; readonly isFar: boolean; readonly ratio: Float64Array };

export type Sweeps = {
  readonly network: FlowNetwork;
  /** By place: -1 for the usual, else where in the lists below its matrices are. */
  readonly slotOf: Int32Array;
  readonly slotCount: number;
  readonly lines: Float64Array;
  readonly isTransformer: Uint8Array;
  readonly hasY: Uint8Array;
  readonly shunts: ReadonlyMap<number, Float64Array>;
  readonly ratios: readonly PlacedRatio[];
  /** By slot: M·A, M·B, D·(1 − Y·M·B) and Y; and the two-port as it is. */
  readonly va: Float64Array;
  readonly vb: Float64Array;
  readonly t: Float64Array;
  readonly y: Float64Array;
  readonly ports: readonly TwoPort[];
};

/** Where the zero sequence has no way, beyond a transformer where something is earthed and where a cut branch ends. */
const openOverEarthed = 1e8;
const openAtCut = 1e6;

/** Lays out what does not depend on taps; `factorSweeps` has to follow. */
export function prepareSweeps(
  study: Study,
  network: FlowNetwork,
  ratios: readonly PlacedRatio[],
  withMachines: boolean,
): Sweeps {
  const { parent, model, branch } = network;
  const lineCount = (study.feeder.lines?.length ?? 0) + (study.project?.lines?.length ?? 0);
  const shunts = listShunts(network, withMachines);
  const count = parent.length;
  const slotOf = new Int32Array(count).fill(-1);
  const hasY = new Uint8Array(count);
  const isTransformer = new Uint8Array(count);
  const isRegulated = new Uint8Array(count);
  for (const { place } of ratios) isRegulated[place] = 1;
  let slotCount = 0;
  for (let place = count - 1; place >= 0; place--) {
    if (shunts.has(place)) hasY[place] = 1;
    if (branch[place]! >= lineCount) isTransformer[place] = 1;
    if (isTransformer[place] || isRegulated[place] || hasY[place]) slotOf[place] = slotCount++;
    const above = parent[place]!;
    if (above === -1) continue;
    const earths = isTransformer[place] && branchAt(model, branch[place]!).zeroSequence.kind === 'shunt';
    if (hasY[place] || earths) hasY[above] = 1;
  }
  const matrices = () => new Float64Array(slotCount * matrixSize);
  return {
    network,
    slotOf,
    slotCount,
    lines: layOutLines(study, network),
    isTransformer,
    hasY,
    shunts,
    ratios,
    va: matrices(),
    vb: matrices(),
    t: matrices(),
    y: matrices(),
    ports: Array.from({ length: slotCount }, emptyTwoPort),
  };
}

/** Works out the matrices of all slots, from the leaves in; to be done again when taps have moved. */
export function factorSweeps(sweeps: Sweeps): void {
  const { network, slotOf, hasY, shunts, ratios, va, vb, t, y, ports } = sweeps;
  const ratiosAt = new Map<number, PlacedRatio[]>();
  for (const each of ratios) ratiosAt.set(each.place, [...(ratiosAt.get(each.place) ?? []), each]);
  y.fill(0);
  const scratch = new Float64Array(2 * matrixSize);
  for (let place = slotOf.length - 1; place >= 0; place--) {
    const slot = slotOf[place]!;
    if (slot === -1) continue;
    const at = slot * matrixSize;
    const shunt = shunts.get(place);
    if (shunt) for (let k = 0; k < matrixSize; k++) y[at + k]! += shunt[k]!;
    const above = network.parent[place]!;
    if (above === -1) continue;
    const port = ports[slot]!;
    writePort(sweeps, port, place, at);
    for (const { ratio, isFar } of ratiosAt.get(place) ?? []) addRegulator(port, ratio, isFar);
    if (!hasY[place]) {
      va.set(port.a, at);
      vb.set(port.b, at);
      t.set(port.d, at);
    } else {
      // 1 + B·Y, and its inverse M.
      multiplyMatrices(scratch, 0, port.b, 0, y, at);
      for (let p = 0; p < 3; p++) scratch[8 * p]! += 1;
      invertMatrix(scratch, 0);
      multiplyMatrices(va, at, scratch, 0, port.a, 0);
      multiplyMatrices(vb, at, scratch, 0, port.b, 0);
      // D − D·Y·M·B.
      multiplyMatrices(scratch, 0, port.d, 0, y, at);
      multiplyMatrices(scratch, matrixSize, scratch, 0, vb, at);
      for (let k = 0; k < matrixSize; k++) t[at + k] = port.d[k]! - scratch[matrixSize + k]!;
    }
    if (!hasY[above]) continue;
    const up = slotOf[above]! * matrixSize;
    for (let k = 0; k < matrixSize; k++) y[up + k]! += port.c[k]!;
    if (!hasY[place]) continue;
    multiplyMatrices(scratch, matrixSize, scratch, 0, va, at);
    for (let k = 0; k < matrixSize; k++) y[up + k]! += scratch[matrixSize + k]!;
  }
}

function writePort(sweeps: Sweeps, port: TwoPort, place: number, at: number): void {
  const { network, isTransformer, lines, hasY, y } = sweeps;
  if (!isTransformer[place]) {
    writeLine(port, lines, place, network.phases[place]!);
    return;
  }
  const branch = branchAt(network.model, network.branch[place]!);
  const reversed = isReversed(network, place);
  let open = 0;
  if (floatsBeyond(branch, reversed)) {
    const earthed = hasY[place] ? zeroSequenceSize(y, at) : 0;
    const isCut = network.cuts.length > 0 && place >= network.cuts[0]!.place;
    open = earthed > 1e-9 ? openOverEarthed / earthed : isCut ? openAtCut : 0;
  }
  writeTransformer(port, branch, reversed, open);
}

/** Size of the zero-sequence admittance: the mean over rows of their sums. */
function zeroSequenceSize(y: Float64Array, at: number): number {
  let re = 0;
  let im = 0;
  for (let k = at; k < at + matrixSize; k += 2) {
    re += y[k]! / 3;
    im += y[k + 1]! / 3;
  }
  return Math.hypot(re, im);
}

/**
 * Turns currents into the places (6 numbers each) into what each hands on to its parent, in place, and the voltages of the
 * roots into those of all.
 */
export function sweep({ network, slotOf, lines, va, vb, t }: Sweeps, j: Float64Array, v: Float64Array): void {
  const { parent, phases } = network;
  for (let place = parent.length - 1; place >= 0; place--) {
    const above = parent[place]!;
    if (above === -1) continue;
    const slot = slotOf[place]!;
    const from = place * vectorSize;
    const to = above * vectorSize;
    if (slot !== -1) addProduct(j, to, t, slot * matrixSize, j, from);
    else for (let k = 0; k < vectorSize; k++) j[to + k]! += j[from + k]!;
  }
  for (let place = 0; place < parent.length; place++) {
    const above = parent[place]!;
    if (above === -1) continue;
    const slot = slotOf[place]!;
    const at = place * vectorSize;
    const from = above * vectorSize;
    if (slot !== -1) {
      v.fill(0, at, at + vectorSize);
      addProduct(v, at, va, slot * matrixSize, v, from);
      addProduct(v, at, vb, slot * matrixSize, j, at);
      continue;
    }
    const there = phases[place]!;
    for (let p = 0; p < 3; p++) {
      const isThere = there & (1 << p);
      v[at + 2 * p] = isThere ? v[from + 2 * p]! : 0;
      v[at + 2 * p + 1] = isThere ? v[from + 2 * p + 1]! : 0;
    }
    addProduct(v, at, lines, place * matrixSize, j, at);
  }
}

/**
 * Gives the current that each place takes through its branch, at its own end, and what the near end takes of the parent:
 * from the solved voltages and the currents into the places (not those that `sweep` has summed up).
 */
export function findBranchCurrents(
  { network, slotOf, ports, shunts }: Sweeps,
  injected: Float64Array,
  v: Float64Array,
): { far: Float64Array; near: Float64Array } {
  const { parent } = network;
  const far = new Float64Array(v.length);
  const near = new Float64Array(v.length);
  for (let k = 0; k < v.length; k++) far[k] = -injected[k]!;
  for (let place = parent.length - 1; place >= 0; place--) {
    const at = place * vectorSize;
    const shunt = shunts.get(place);
    if (shunt) addProduct(far, at, shunt, 0, v, at);
    const above = parent[place]!;
    if (above === -1) continue;
    const slot = slotOf[place]!;
    if (slot === -1) for (let k = 0; k < vectorSize; k++) near[at + k] = far[at + k]!;
    else {
      addProduct(near, at, ports[slot]!.c, 0, v, above * vectorSize);
      addProduct(near, at, ports[slot]!.d, 0, far, at);
    }
    for (let k = 0; k < vectorSize; k++) far[above * vectorSize + k]! += near[at + k]!;
  }
  return { far, near };
}
