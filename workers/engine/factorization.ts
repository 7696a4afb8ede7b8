import type { ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import { replacement, vanishing } from './tree-sweep.ts';
import type { Adjacency } from './elimination-order.ts';

/*
 * P·Y·Pᵀ = L·D·Lᵀ of a complex symmetric (not Hermitian) bus admittance matrix. Where L has entries is found once, along the
 * elimination tree (T. A. Davis, "Algorithm 849: a concise sparse Cholesky factorization package", ACM TOMS 31 (2005)); the
 * numbers then follow column by column, each taken off the later ones. Columns of L are kept with rows ascending, without
 * the unit diagonal.
 */

/** What the zeros of the matrix alone decide; one serves all networks over the same branches. */
export type Structure = {
  /** Bus in place k of the elimination. */
  readonly order: Int32Array;
  /** Place of a bus in the elimination. */
  readonly place: Int32Array;
  /** Column j of L is at columnStart[j] … columnStart[j + 1] - 1. */
  readonly columnStart: Int32Array;
  readonly rows: Int32Array;
  /** By adjacency entry: where in L it belongs, -1 for the half above the diagonal. */
  readonly entryOf: Int32Array;
};

export type Factors = {
  readonly structure: Structure;
  readonly lower: ComplexArray;
  readonly pivots: ComplexArray;
  /** Buses whose pivot vanished beside their own admittances: the network resonates there and numbers are unsafe. */
  readonly weakBuses: readonly number[];
};

/** Finds where each column of L has entries, without numbers. */
export function analyseStructure(adjacency: Adjacency, order: Int32Array): Structure {
  const count = order.length;
  const place = new Int32Array(count);
  for (let k = 0; k < count; k++) place[order[k]!] = k;
  const parent = new Int32Array(count).fill(-1);
  const visited = new Int32Array(count).fill(-1);
  const columnStart = new Int32Array(count + 1);
  for (let k = 0; k < count; k++) {
    visited[k] = k;
    const v = order[k]!;
    for (let p = adjacency.start[v]!; p < adjacency.start[v + 1]!; p++) {
      for (let i = place[adjacency.neighbour[p]!]!; i < k && visited[i] !== k; i = parent[i]!) {
        if (parent[i] === -1) parent[i] = k;
        columnStart[i + 1]!++;
        visited[i] = k;
      }
    }
  }
  for (let k = 0; k < count; k++) columnStart[k + 1]! += columnStart[k]!;

  const rows = new Int32Array(columnStart[count]!);
  const entryOf = new Int32Array(adjacency.neighbour.length).fill(-1);
  const end = columnStart.slice(0, count);
  visited.fill(-1);
  for (let k = 0; k < count; k++) {
    visited[k] = k;
    const v = order[k]!;
    for (let p = adjacency.start[v]!; p < adjacency.start[v + 1]!; p++) {
      const first = place[adjacency.neighbour[p]!]!;
      for (let i = first; i < k && visited[i] !== k; i = parent[i]!) {
        rows[end[i]!] = k;
        end[i]!++;
        visited[i] = k;
      }
      if (first < k) entryOf[p] = end[first]! - 1;
    }
  }
  return { order, place, columnStart, rows, entryOf };
}

/**
 * Factorizes the matrix with `diagonal` (by bus) and `offDiagonal` (by adjacency entry, symmetric); repeated entries add.
 * Negative reactances can make a pivot vanish beside `scaleOfRow`, the size of what the row is made of, though the matrix
 * has an inverse. It is then moved off zero by the square root of what a double resolves, which costs half the digits
 * nearby (X. S. Li, J. W. Demmel, static pivoting, ACM TOMS 29 (2003)).
 * Example: diagonal [2, 2], off-diagonal −1 gives pivots 2 and 1.5.
 */
export function factorize(
  structure: Structure,
  diagonal: ComplexArray,
  offDiagonal: ComplexArray,
  scaleOfRow: Float64Array,
): Factors {
  const { order, columnStart, rows, entryOf } = structure;
  const count = order.length;
  const lower = complexArray(rows.length);
  const pivots = complexArray(count);
  const { re: lRe, im: lIm } = lower;
  const { re: dRe, im: dIm } = pivots;
  const weakBuses: number[] = [];
  for (let k = 0; k < count; k++) {
    dRe[k] = diagonal.re[order[k]!]!;
    dIm[k] = diagonal.im[order[k]!]!;
  }
  for (let p = 0; p < entryOf.length; p++) {
    const entry = entryOf[p]!;
    if (entry === -1) continue;
    lRe[entry]! += offDiagonal.re[p]!;
    lIm[entry]! += offDiagonal.im[p]!;
  }

  for (let j = 0; j < count; j++) {
    const scale = scaleOfRow[order[j]!]!;
    if (Math.abs(dRe[j]!) + Math.abs(dIm[j]!) <= vanishing * scale) {
      weakBuses.push(order[j]!);
      dRe[j] = replacement * scale;
      dIm[j] = 0;
    }
    const square = dRe[j]! * dRe[j]! + dIm[j]! * dIm[j]!;
    const inverseRe = dRe[j]! / square;
    const inverseIm = -dIm[j]! / square;
    const end = columnStart[j + 1]!;
    for (let p = columnStart[j]!; p < end; p++) {
      const yRe = lRe[p]!;
      const yIm = lIm[p]!;
      const shareRe = yRe * inverseRe - yIm * inverseIm;
      const shareIm = yRe * inverseIm + yIm * inverseRe;
      const i = rows[p]!;
      lRe[p] = shareRe;
      lIm[p] = shareIm;
      dRe[i]! -= shareRe * yRe - shareIm * yIm;
      dIm[i]! -= shareRe * yIm + shareIm * yRe;
      // Both lists ascend, and all later rows of this column are among those of column i.
      let found = columnStart[i]!;
      for (let q = p + 1; q < end; q++) {
        while (rows[found]! < rows[q]!) found++;
        lRe[found]! -= shareRe * lRe[q]! - shareIm * lIm[q]!;
        lIm[found]! -= shareRe * lIm[q]! + shareIm * lRe[q]!;
      }
    }
  }
  return { structure, lower, pivots, weakBuses };
}

/** Solves Y·x = b in place: `values` goes in as b and comes out as x, both by bus; entries of other buses are left alone. */
export function solveInPlace(factors: Factors, values: ComplexArray): void {
  const { structure, lower, pivots } = factors;
  const { order, columnStart, rows } = structure;
  const count = order.length;
  const x = complexArray(count);
  for (let k = 0; k < count; k++) {
    x.re[k] = values.re[order[k]!]!;
    x.im[k] = values.im[order[k]!]!;
  }
  for (let j = 0; j < count; j++) {
    const xRe = x.re[j]!;
    const xIm = x.im[j]!;
    for (let p = columnStart[j]!; p < columnStart[j + 1]!; p++) {
      x.re[rows[p]!]! -= lower.re[p]! * xRe - lower.im[p]! * xIm;
      x.im[rows[p]!]! -= lower.re[p]! * xIm + lower.im[p]! * xRe;
    }
  }
  for (let j = count - 1; j >= 0; j--) {
    const pRe = pivots.re[j]!;
    const pIm = pivots.im[j]!;
    const square = pRe * pRe + pIm * pIm;
    let xRe = (x.re[j]! * pRe + x.im[j]! * pIm) / square;
    let xIm = (x.im[j]! * pRe - x.re[j]! * pIm) / square;
    for (let p = columnStart[j]!; p < columnStart[j + 1]!; p++) {
      const row = rows[p]!;
      xRe -= lower.re[p]! * x.re[row]! - lower.im[p]! * x.im[row]!;
      xIm -= lower.re[p]! * x.im[row]! + lower.im[p]! * x.re[row]!;
    }
    x.re[j] = xRe;
    x.im[j] = xIm;
  }
  for (let k = 0; k < count; k++) {
    values.re[order[k]!] = x.re[k]!;
    values.im[order[k]!] = x.im[k]!;
  }
}
