import type { Line, Study } from '../../../shared/schemas/study.ts';
import type { Branch, Model } from '../case.ts';
import { allPhases, isPresent } from '../case.ts';
import type { Complex } from '../complex.ts';
import { add, divide, polar, scale, subtract, zero } from '../complex.ts';
import { isConstructed, lineCalculator } from '../line-impedances.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { baseOhms } from '../per-unit.ts';
import { listElements } from '../study-elements.ts';
import type { FlowNetwork } from './flow-network.ts';
import { matrixSize, writeSequences } from './matrix3.ts';

/*
 * Branches between a place and its parent, per unit: V = A·Vp − B·I and Ip = C·Vp + D·I, with the currents away from the
 * source. Lines have A = D = 1 and C = 0. Transformers are written in sequences; they stand at their nominal ratio.
 */

export type TwoPort = { a: Float64Array; b: Float64Array; c: Float64Array; d: Float64Array };

const one: Complex = { re: 1, im: 0 };

/** Writes the series impedance of every line, by place; what is no line stays zero. */
export function layOutLines(study: Study, network: FlowNetwork): Float64Array {
  const { model, branch, phases } = network;
  const matrices = new Float64Array(branch.length * matrixSize);
  const lines: readonly Line[] = listElements(study, 'lines');
  const calculate = lineCalculator(study);
  for (let place = 0; place < branch.length; place++) {
    const index = branch[place]!;
    const line = index === -1 ? undefined : lines[index];
    if (!line) continue;
    const at = place * matrixSize;
    if (isConstructed(line)) {
      const perOhm = line.km / baseOhms(model.baseMva, nodeAt(model, branchAt(model, index).from).kv);
      writeConstructed(matrices, at, line.phases, calculate(line).zPerKm, perOhm);
    } else writeTransposed(matrices, at, branchAt(model, index), phases[place]!);
  }
  return matrices;
}

/** The study's matrix has rows and columns in the order of the line's phases. */
function writeConstructed(
  out: Float64Array,
  at: number,
  letters: string,
  zPerKm: readonly (readonly { r: number; x: number }[])[],
  perOhm: number,
): void {
  const rows = [...letters].map((letter) => 'ABC'.indexOf(letter));
  zPerKm.forEach((entries, i) =>
    entries.forEach(({ r, x }, j) => {
      const k = at + 6 * rows[i]! + 2 * rows[j]!;
      out[k] = r * perOhm;
      out[k + 1] = x * perOhm;
    }),
  );
}

/** zs = (z0 + 2·z1)/3 on the diagonal and zm = (z0 − z1)/3 beside it. */
function writeTransposed(out: Float64Array, at: number, branch: Branch, phases: number): void {
  const z0 = branch.zeroSequence.kind === 'series' ? branch.zeroSequence.z : zero;
  const self = branch.phases === allPhases ? scale(add(z0, scale(branch.z1, 2)), 1 / 3) : branch.self;
  const mutual = branch.phases === allPhases ? scale(subtract(z0, branch.z1), 1 / 3) : branch.mutual;
  for (let p = 0; p < 3; p++) {
    for (let q = 0; q < 3; q++) {
      if (!(phases & (1 << p)) || !(phases & (1 << q))) continue;
      const { re, im } = p === q ? self : mutual;
      out[at + 6 * p + 2 * q] = re;
      out[at + 6 * p + 2 * q + 1] = im;
    }
  }
}

export function emptyTwoPort(): TwoPort {
  const matrix = () => new Float64Array(matrixSize);
  return { a: matrix(), b: matrix(), c: matrix(), d: matrix() };
}

/** Writes a line or closed switch: A = D = 1 in the phases that are there. */
export function writeLine(port: TwoPort, lines: Float64Array, place: number, phases: number): void {
  port.b.set(lines.subarray(place * matrixSize, (place + 1) * matrixSize));
  port.c.fill(0);
  for (const matrix of [port.a, port.d]) {
    matrix.fill(0);
    for (let p = 0; p < 3; p++) if (phases & (1 << p)) matrix[8 * p] = 1;
  }
}

/** Whether a branch lets the zero sequence of the far side find no way on or to earth. */
export function floatsBeyond(branch: Branch, isReversed: boolean): boolean {
  const path = branch.zeroSequence;
  if (path.kind === 'series') return false;
  return path.kind === 'open' || path.end === (isReversed ? 'to' : 'from');
}

/**
 * Writes a transformer: each sequence by itself, the positive turned back by the clock and the negative forward. Beyond a
 * winding that gives the zero sequence no way, `openOhms` stands for "none" where something there is earthed.
 */
export function writeTransformer(port: TwoPort, branch: Branch, isReversed: boolean, openOhms: number): void {
  const degrees = (isReversed ? 30 : -30) * branch.clockHour;
  const turn = polar(1, degrees);
  const back = polar(1, -degrees);
  const path = branch.zeroSequence;
  const through = path.kind === 'series' ? one : zero;
  const far = isReversed ? 'from' : 'to';
  const earthsFar = path.kind === 'shunt' && path.end === far;
  const earthsNear = path.kind === 'shunt' && !earthsFar;
  const b0 = path.kind === 'series' || earthsFar ? path.z : { re: openOhms, im: 0 };
  writeSequences(port.a, 0, through, turn, back);
  writeSequences(port.b, 0, b0, branch.z1, branch.z1);
  writeSequences(port.c, 0, earthsNear ? divide(one, path.z) : zero, zero, zero);
  writeSequences(port.d, 0, through, back, turn);
}

/** Puts a regulator with one ratio for each phase at an end of a branch: the far side has ratio times the near one's voltage. */
export function addRegulator(port: TwoPort, ratio: ArrayLike<number>, isFar: boolean): void {
  for (let p = 0; p < 3; p++) {
    for (let q = 0; q < 3; q++) {
      for (let k = 6 * p + 2 * q; k < 6 * p + 2 * q + 2; k++) {
        port.a[k]! *= isFar ? ratio[p]! : ratio[q]!;
        if (isFar) {
          port.b[k]! *= ratio[p]! * ratio[q]!;
          port.d[k]! *= ratio[q]!;
        } else {
          port.c[k]! *= ratio[p]! * ratio[q]!;
          port.d[k]! *= ratio[p]!;
        }
      }
    }
  }
}

/** Whether a place hangs from its branch the other way round: its node is the branch's `from`. */
export function isReversed({ model, branch, nodeOf }: FlowNetwork, place: number): boolean {
  return branchAt(model, branch[place]!).from === nodeOf[place];
}

/** Admittances to earth by place, as matrices: grounding banks, and what machines are to the other two sequences. */
export function listShunts(network: FlowNetwork, withMachines: boolean): Map<number, Float64Array> {
  const { model, choice, placeOf } = network;
  const shunts = new Map<number, Float64Array>();
  const put = (shunt: Model['machines'][number], z2: Complex | null) => {
    const place = placeOf[shunt.node]!;
    if (place === -1 || !isPresent(choice, shunt)) return;
    const own = new Float64Array(matrixSize);
    const admittance = (z: Complex | null) => (z ? divide(one, z) : zero);
    writeSequences(own, 0, admittance(shunt.z0), zero, admittance(z2));
    const there = shunts.get(place);
    if (there) for (let k = 0; k < matrixSize; k++) there[k]! += own[k]!;
    else shunts.set(place, own);
  };
  for (const bank of model.groundingBanks) put(bank, null);
  if (withMachines) for (const machine of model.machines) put(machine, machine.z2);
  return shunts;
}
