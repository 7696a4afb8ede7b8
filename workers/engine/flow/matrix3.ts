import type { Complex } from '../complex.ts';

/*
 * Three by three complex matrices over phases A, B, C, many of them in one array: 18 numbers each, row by row, real and
 * imaginary part side by side; a vector over the phases is 6 numbers.
 */

export const matrixSize = 18;
export const vectorSize = 6;

/** out = p·q; `out` must be neither of them. */
export function multiplyMatrices(
  out: Float64Array,
  at: number,
  p: Float64Array,
  pAt: number,
  q: Float64Array,
  qAt: number,
): void {
  for (let row = 0; row < 3; row++) {
    for (let column = 0; column < 3; column++) {
      let re = 0;
      let im = 0;
      for (let k = 0; k < 3; k++) {
        const a = pAt + 6 * row + 2 * k;
        const b = qAt + 6 * k + 2 * column;
        re += p[a]! * q[b]! - p[a + 1]! * q[b + 1]!;
        im += p[a]! * q[b + 1]! + p[a + 1]! * q[b]!;
      }
      out[at + 6 * row + 2 * column] = re;
      out[at + 6 * row + 2 * column + 1] = im;
    }
  }
}

/** out += m·v. */
export function addProduct(
  out: Float64Array,
  at: number,
  m: Float64Array,
  mAt: number,
  v: Float64Array,
  vAt: number,
): void {
  const aRe = v[vAt]!;
  const aIm = v[vAt + 1]!;
  const bRe = v[vAt + 2]!;
  const bIm = v[vAt + 3]!;
  const cRe = v[vAt + 4]!;
  const cIm = v[vAt + 5]!;
  for (let row = 0; row < 3; row++) {
    const k = mAt + 6 * row;
    out[at + 2 * row]! +=
      m[k]! * aRe - m[k + 1]! * aIm + m[k + 2]! * bRe - m[k + 3]! * bIm + m[k + 4]! * cRe - m[k + 5]! * cIm;
    out[at + 2 * row + 1]! +=
      m[k]! * aIm + m[k + 1]! * aRe + m[k + 2]! * bIm + m[k + 3]! * bRe + m[k + 4]! * cIm + m[k + 5]! * cRe;
  }
}

/** Turns one matrix into its inverse, by elimination with pivoting; false where it has none. */
export function invertMatrix(m: Float64Array, at: number): boolean {
  return invertSquare(m, at, 3);
}

/** Turns a square complex matrix of any size, laid out in the same way, into its inverse (Gauss–Jordan, in place). */
export function invertSquare(m: Float64Array, at: number, size: number): boolean {
  const swapped = new Int32Array(size);
  const index = (row: number, column: number) => at + 2 * (size * row + column);
  for (let k = 0; k < size; k++) {
    let pivot = k;
    for (let row = k + 1; row < size; row++) {
      if (sizeAt(m, index(row, k)) > sizeAt(m, index(pivot, k))) pivot = row;
    }
    swapped[k] = pivot;
    if (!(sizeAt(m, index(pivot, k)) > 0)) return false;
    if (pivot !== k) swapRows(m, index(k, 0), index(pivot, 0), size);
    divideRow(m, index(k, 0), k, size);
    for (let row = 0; row < size; row++) if (row !== k) takeAway(m, index(row, 0), index(k, 0), k, size);
  }
  for (let k = size - 1; k >= 0; k--) {
    if (swapped[k] === k) continue;
    for (let row = 0; row < size; row++) swapEntries(m, index(row, k), index(row, swapped[k]!));
  }
  return true;
}

function sizeAt(m: Float64Array, at: number): number {
  return Math.abs(m[at]!) + Math.abs(m[at + 1]!);
}

function swapEntries(m: Float64Array, a: number, b: number): void {
  for (let part = 0; part < 2; part++) [m[a + part], m[b + part]] = [m[b + part]!, m[a + part]!];
}

function swapRows(m: Float64Array, a: number, b: number, size: number): void {
  for (let column = 0; column < size; column++) swapEntries(m, a + 2 * column, b + 2 * column);
}

/** Divides the pivot's row by the pivot, in whose place 1/pivot comes. */
function divideRow(m: Float64Array, row: number, k: number, size: number): void {
  const re = m[row + 2 * k]!;
  const im = m[row + 2 * k + 1]!;
  const square = re * re + im * im;
  m[row + 2 * k] = 1;
  m[row + 2 * k + 1] = 0;
  for (let c = row; c < row + 2 * size; c += 2) {
    const [p, q] = [m[c]!, m[c + 1]!];
    m[c] = (p * re + q * im) / square;
    m[c + 1] = (q * re - p * im) / square;
  }
}

function takeAway(m: Float64Array, row: number, pivotRow: number, k: number, size: number): void {
  const re = m[row + 2 * k]!;
  const im = m[row + 2 * k + 1]!;
  if (re === 0 && im === 0) return;
  m[row + 2 * k] = 0;
  m[row + 2 * k + 1] = 0;
  for (let c = 0; c < 2 * size; c += 2) {
    const p = m[pivotRow + c]!;
    const q = m[pivotRow + c + 1]!;
    m[row + c]! -= re * p - im * q;
    m[row + c + 1]! -= re * q + im * p;
  }
}

/** The cosine and sine of 0°, 120° and 240°: powers of a. */
const turnRe = [1, -0.5, -0.5];
const turnIm = [0, Math.sqrt(3) / 2, -Math.sqrt(3) / 2];

/**
 * Writes diag(d0, d1, d2) of the sequences as a matrix over the phases:
 * m_pq = (d0 + d1·a^(q−p) + d2·a^(p−q))/3, with V_p = V0 + a^(−p)·V1 + a^p·V2.
 */
export function writeSequences(out: Float64Array, at: number, d0: Complex, d1: Complex, d2: Complex): void {
  for (let p = 0; p < 3; p++) {
    for (let q = 0; q < 3; q++) {
      const k = (q - p + 3) % 3;
      const [c, s] = [turnRe[k]!, turnIm[k]!];
      out[at + 6 * p + 2 * q] = (d0.re + d1.re * c - d1.im * s + d2.re * c + d2.im * s) / 3;
      out[at + 6 * p + 2 * q + 1] = (d0.im + d1.re * s + d1.im * c - d2.re * s + d2.im * c) / 3;
    }
  }
}

/** Gives the positive sequence of a vector: (Va + a·Vb + a²·Vc)/3. */
export function positiveSequence(v: Float64Array, at: number): Complex {
  let re = 0;
  let im = 0;
  for (let p = 0; p < 3; p++) {
    re += (v[at + 2 * p]! * turnRe[p]! - v[at + 2 * p + 1]! * turnIm[p]!) / 3;
    im += (v[at + 2 * p]! * turnIm[p]! + v[at + 2 * p + 1]! * turnRe[p]!) / 3;
  }
  return { re, im };
}

/** Adds a positive-sequence current to a vector: a^(−p) times it in phase p. */
export function addPositiveSequence(v: Float64Array, at: number, re: number, im: number): void {
  for (let p = 0; p < 3; p++) {
    v[at + 2 * p]! += re * turnRe[p]! + im * turnIm[p]!;
    v[at + 2 * p + 1]! += im * turnRe[p]! - re * turnIm[p]!;
  }
}
