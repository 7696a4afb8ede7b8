import type { ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import type { Adjacency } from './elimination-order.ts';

/*
 * P·Y·Pᵀ = L·D·Lᵀ of a complex symmetric (not Hermitian) bus admittance matrix, row by row along the elimination tree
 * (T. A. Davis, "Algorithm 849: a concise sparse Cholesky factorization package", ACM TOMS 31 (2005)).
 * Columns of L are kept with rows ascending, without the unit diagonal.
 */

/** What the zeros of the matrix alone decide; one serves all networks over the same branches. */
export type Structure = {
  readonly adjacency: Adjacency;
  /** Bus in place k of the elimination. */
  readonly order: Int32Array;
  /** Place of a bus in the elimination. */
  readonly place: Int32Array;
  readonly parent: Int32Array;
  /** Column j of L is at columnStart[j] … columnStart[j + 1] - 1. */
  readonly columnStart: Int32Array;
};

export type Factors = {
  readonly structure: Structure;
  readonly rows: Int32Array;
  readonly lower: ComplexArray;
  readonly pivots: ComplexArray;
  /** Buses whose pivot vanished beside their own admittances: the network resonates there and numbers are unsafe. */
  readonly weakBuses: readonly number[];
};

/** Finds the elimination tree and the size of each column of L, without numbers. */
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
  return { adjacency, order, place, parent, columnStart };
}

/*
 * Negative reactances can make a pivot vanish though the matrix has an inverse. It is then moved off zero by the square root of
 * what a double resolves, which costs half the digits nearby (X. S. Li, J. W. Demmel, static pivoting, ACM TOMS 29 (2003)).
 */
const vanishing = 1e-11;
const replacement = 1e-8;

/**
 * Factorizes the matrix with `diagonal` (by bus) and `offDiagonal` (by adjacency entry, symmetric); repeated entries add.
 * Example: diagonal [2, 2], off-diagonal −1 gives pivots 2 and 1.5.
 */
export function factorize(structure: Structure, diagonal: ComplexArray, offDiagonal: ComplexArray): Factors {
  const { adjacency, order, place, parent, columnStart } = structure;
  const count = order.length;
  const size = columnStart[count]!;
  const rows = new Int32Array(size);
  const lower = complexArray(size);
  const pivots = complexArray(count);
  const filled = new Int32Array(count);
  const work = complexArray(count);
  const visited = new Int32Array(count).fill(-1);
  const pattern = new Int32Array(count);
  const weakBuses: number[] = [];

  for (let k = 0; k < count; k++) {
    const v = order[k]!;
    let top = scatterRow(k, v);
    let dRe = diagonal.re[v]! + work.re[k]!;
    let dIm = diagonal.im[v]! + work.im[k]!;
    work.re[k] = work.im[k] = 0;
    for (; top < count; top++) {
      const i = pattern[top]!;
      const yRe = work.re[i]!;
      const yIm = work.im[i]!;
      work.re[i] = work.im[i] = 0;
      const end = columnStart[i]! + filled[i]!;
      for (let p = columnStart[i]!; p < end; p++) {
        const row = rows[p]!;
        work.re[row]! -= lower.re[p]! * yRe - lower.im[p]! * yIm;
        work.im[row]! -= lower.re[p]! * yIm + lower.im[p]! * yRe;
      }
      const pRe = pivots.re[i]!;
      const pIm = pivots.im[i]!;
      const square = pRe * pRe + pIm * pIm;
      const lRe = (yRe * pRe + yIm * pIm) / square;
      const lIm = (yIm * pRe - yRe * pIm) / square;
      dRe -= lRe * yRe - lIm * yIm;
      dIm -= lRe * yIm + lIm * yRe;
      rows[end] = k;
      lower.re[end] = lRe;
      lower.im[end] = lIm;
      filled[i]!++;
    }
    const scale = scaleOfRow(v);
    if (Math.abs(dRe) + Math.abs(dIm) <= vanishing * scale) {
      weakBuses.push(v);
      dRe = replacement * scale;
      dIm = 0;
    }
    pivots.re[k] = dRe;
    pivots.im[k] = dIm;
  }
  return { structure, rows, lower, pivots, weakBuses };

  function scaleOfRow(v: number): number {
    let scale = Math.abs(diagonal.re[v]!) + Math.abs(diagonal.im[v]!);
    for (let p = adjacency.start[v]!; p < adjacency.start[v + 1]!; p++) {
      scale += Math.abs(offDiagonal.re[p]!) + Math.abs(offDiagonal.im[p]!);
    }
    return scale;
  }

  /** Spreads row k into `work` and leaves the columns it meets, in elimination order, at the end of `pattern`. */
  function scatterRow(k: number, v: number): number {
    let top = count;
    visited[k] = k;
    for (let p = adjacency.start[v]!; p < adjacency.start[v + 1]!; p++) {
      let i = place[adjacency.neighbour[p]!]!;
      if (i > k) continue;
      work.re[i]! += offDiagonal.re[p]!;
      work.im[i]! += offDiagonal.im[p]!;
      let length = 0;
      for (; visited[i] !== k; i = parent[i]!) {
        pattern[length++] = i;
        visited[i] = k;
      }
      while (length > 0) pattern[--top] = pattern[--length]!;
    }
    return top;
  }
}

/** Solves Y·x = b in place: `values` goes in as b and comes out as x, both by bus. */
export function solveInPlace(factors: Factors, values: ComplexArray): void {
  const { structure, rows, lower, pivots } = factors;
  const { order, columnStart } = structure;
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
