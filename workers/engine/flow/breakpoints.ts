import type { FlowNetwork } from './flow-network.ts';
import type { Sweeps } from './flow-sweeps.ts';
import { sweep } from './flow-sweeps.ts';
import { invertSquare, vectorSize } from './matrix3.ts';

/*
 * Loops: at each cut a current goes into the hanging end and out of the place it would join, such that both have the same
 * voltage. How the differences answer to these currents is a matrix of three times as many rows as there are cuts.
 */

/** More loops than this are taken for a network that a sweep is not made for. */
export const mostCuts = 40;

export type Breakpoints = {
  /** What has to be added to the currents for the differences to vanish: the inverse of the answer, row by row. */
  readonly inverse: Float64Array;
  readonly size: number;
};

/** Tries a unit current at every cut and phase; undefined where the cuts leave the currents open, or there are too many. */
export function findBreakpoints(sweeps: Sweeps): Breakpoints | undefined {
  const { network } = sweeps;
  const { cuts } = network;
  if (cuts.length > mostCuts) return undefined;
  const size = 3 * cuts.length;
  const inverse = new Float64Array(2 * size * size);
  const length = network.parent.length * vectorSize;
  const v = new Float64Array(length);
  const difference = new Float64Array(2 * size);
  for (let column = 0; column < size; column++) {
    const cut = cuts[Math.floor(column / 3)]!;
    const phase = column % 3;
    const k = 2 * (size * column + column);
    if (!(cut.phases & (1 << phase))) {
      inverse[k] = 1;
      continue;
    }
    const j = new Float64Array(length);
    j[cut.place * vectorSize + 2 * phase]! += 1;
    j[cut.target * vectorSize + 2 * phase]! -= 1;
    v.fill(0);
    sweep(sweeps, j, v);
    writeDifferences(network, v, difference);
    for (let row = 0; row < size; row++) {
      inverse[2 * (size * row + column)] = difference[2 * row]!;
      inverse[2 * (size * row + column) + 1] = difference[2 * row + 1]!;
    }
  }
  return invertSquare(inverse, 0, size) ? { inverse, size } : undefined;
}

/** Adds the currents of the cuts, 6 numbers each, to those into the places. */
export function addCutCurrents({ cuts }: FlowNetwork, currents: Float64Array, j: Float64Array): void {
  cuts.forEach(({ place, target }, index) => {
    for (let k = 0; k < vectorSize; k++) {
      j[place * vectorSize + k]! += currents[index * vectorSize + k]!;
      j[target * vectorSize + k]! -= currents[index * vectorSize + k]!;
    }
  });
}

/** Corrects the currents of the cuts by the differences that are left, and gives the largest of these. */
export function closeCuts(
  network: FlowNetwork,
  { inverse, size }: Breakpoints,
  v: Float64Array,
  currents: Float64Array,
): number {
  const difference = new Float64Array(2 * size);
  const largest = writeDifferences(network, v, difference);
  for (let row = 0; row < size; row++) {
    for (let column = 0; column < size; column++) {
      const k = 2 * (size * row + column);
      const [re, im] = [difference[2 * column]!, difference[2 * column + 1]!];
      currents[2 * row]! -= inverse[k]! * re - inverse[k + 1]! * im;
      currents[2 * row + 1]! -= inverse[k]! * im + inverse[k + 1]! * re;
    }
  }
  return largest;
}

function writeDifferences({ cuts }: FlowNetwork, v: Float64Array, difference: Float64Array): number {
  let largest = 0;
  cuts.forEach(({ place, target, phases }, index) => {
    for (let phase = 0; phase < 3; phase++) {
      const isThere = phases & (1 << phase);
      const at = 2 * (3 * index + phase);
      for (let part = 0; part < 2; part++) {
        const k = 2 * phase + part;
        difference[at + part] = isThere ? v[place * vectorSize + k]! - v[target * vectorSize + k]! : 0;
        largest = Math.max(largest, Math.abs(difference[at + part]!));
      }
    }
  });
  return largest;
}
