import type { Complex, ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import type { Factors } from './factorization.ts';

/*
 * The entries of Z = Y⁻¹ that lie where L has entries: the diagonal, every pair of buses that a branch joins, and the
 * fill. Takahashi's recurrence, from Z = D⁻¹·L⁻¹ + (I − Lᵀ)·Z: column by column from the last,
 *   Z_ij = −Σ_k L_kj·Z_ik,   Z_jj = 1/d_j − Σ_k L_kj·Z_kj   (k > j where L_kj ≠ 0)
 * (K. Takahashi, J. Fagan, M.-S. Chen, "Formation of a sparse bus impedance matrix and its application to short
 * circuit study", PICA 1973; A. M. Erisman, W. F. Tinney, CACM 18 (1975)).
 */

export type SelectedInverse = {
  readonly factors: Factors;
  /** By place in the elimination. */
  readonly diagonal: ComplexArray;
  /** Beside the entries of L. */
  readonly below: ComplexArray;
};

/** Computes the selected entries; the cost is that of the factorization, linear on a tree. */
export function invertSelected(factors: Factors): SelectedInverse {
  const { rows, lower, pivots, structure } = factors;
  const { columnStart } = structure;
  const count = pivots.re.length;
  const diagonal = complexArray(count);
  const below = complexArray(rows.length);
  for (let j = count - 1; j >= 0; j--) {
    const start = columnStart[j]!;
    const end = columnStart[j + 1]!;
    for (let p = start; p < end; p++) accumulate(p, end);
    const square = pivots.re[j]! ** 2 + pivots.im[j]! ** 2;
    let zRe = pivots.re[j]! / square;
    let zIm = -pivots.im[j]! / square;
    for (let p = start; p < end; p++) {
      zRe -= lower.re[p]! * below.re[p]! - lower.im[p]! * below.im[p]!;
      zIm -= lower.re[p]! * below.im[p]! + lower.im[p]! * below.re[p]!;
    }
    diagonal.re[j] = zRe;
    diagonal.im[j] = zIm;
  }
  return { factors, diagonal, below };

  /** Takes what row rows[p] of the finished part adds to the entries p … end of the current column. */
  function accumulate(p: number, end: number): void {
    const i = rows[p]!;
    subtractProduct(p, p, diagonal.re[i]!, diagonal.im[i]!);
    // Both lists ascend, and all later rows of this column are among those of column i.
    let found = columnStart[i]!;
    for (let q = p + 1; q < end; q++) {
      while (rows[found]! < rows[q]!) found++;
      subtractProduct(p, q, below.re[found]!, below.im[found]!);
      subtractProduct(q, p, below.re[found]!, below.im[found]!);
    }
  }

  function subtractProduct(target: number, factor: number, zRe: number, zIm: number): void {
    below.re[target]! -= lower.re[factor]! * zRe - lower.im[factor]! * zIm;
    below.im[target]! -= lower.re[factor]! * zIm + lower.im[factor]! * zRe;
  }
}

/** Gives Z_uu of a bus. */
export function drivingPoint(inverse: SelectedInverse, u: number): Complex {
  const j = inverse.factors.structure.place[u]!;
  return { re: inverse.diagonal.re[j]!, im: inverse.diagonal.im[j]! };
}

/** Gives Z_uv of two buses that are the same or joined by a branch; any other pair throws. */
export function transferOfPair(inverse: SelectedInverse, u: number, v: number): Complex {
  if (u === v) return drivingPoint(inverse, u);
  const { structure, rows } = inverse.factors;
  const j = Math.min(structure.place[u]!, structure.place[v]!);
  const i = Math.max(structure.place[u]!, structure.place[v]!);
  let low = structure.columnStart[j]!;
  let high = structure.columnStart[j + 1]! - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const row = rows[middle]!;
    if (row === i) return { re: inverse.below.re[middle]!, im: inverse.below.im[middle]! };
    if (row < i) low = middle + 1;
    else high = middle - 1;
  }
  throw new Error(`Expected two buses joined by a branch, got ${u} and ${v}.`);
}
