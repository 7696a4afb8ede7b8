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
  const { lower, pivots, structure } = factors;
  const { columnStart, rows } = structure;
  const count = pivots.re.length;
  const diagonal = complexArray(count);
  const below = complexArray(rows.length);
  const { re: lRe, im: lIm } = lower;
  const { re: zRe, im: zIm } = below;
  for (let j = count - 1; j >= 0; j--) {
    const start = columnStart[j]!;
    const end = columnStart[j + 1]!;
    // What row rows[p] of the finished part adds to the entries of this column from p on.
    for (let p = start; p < end; p++) {
      const i = rows[p]!;
      const ownRe = diagonal.re[i]!;
      const ownIm = diagonal.im[i]!;
      let sumRe = lRe[p]! * ownRe - lIm[p]! * ownIm;
      let sumIm = lRe[p]! * ownIm + lIm[p]! * ownRe;
      // Both lists ascend, and all later rows of this column are among those of column i.
      let found = columnStart[i]!;
      for (let q = p + 1; q < end; q++) {
        while (rows[found]! < rows[q]!) found++;
        const re = zRe[found]!;
        const im = zIm[found]!;
        sumRe += lRe[q]! * re - lIm[q]! * im;
        sumIm += lRe[q]! * im + lIm[q]! * re;
        zRe[q]! -= lRe[p]! * re - lIm[p]! * im;
        zIm[q]! -= lRe[p]! * im + lIm[p]! * re;
      }
      zRe[p]! -= sumRe;
      zIm[p]! -= sumIm;
    }
    const square = pivots.re[j]! ** 2 + pivots.im[j]! ** 2;
    let re = pivots.re[j]! / square;
    let im = -pivots.im[j]! / square;
    for (let p = start; p < end; p++) {
      re -= lRe[p]! * zRe[p]! - lIm[p]! * zIm[p]!;
      im -= lRe[p]! * zIm[p]! + lIm[p]! * zRe[p]!;
    }
    diagonal.re[j] = re;
    diagonal.im[j] = im;
  }
  return { factors, diagonal, below };
}

/** Gives Z_uu of a bus of the mesh. */
export function meshDrivingPoint(inverse: SelectedInverse, u: number): Complex {
  const j = inverse.factors.structure.place[u]!;
  return { re: inverse.diagonal.re[j]!, im: inverse.diagonal.im[j]! };
}

/** Gives Z_uv of two buses of the mesh that a branch joins; any other pair throws. */
export function meshTransfer(inverse: SelectedInverse, u: number, v: number): Complex {
  const { structure } = inverse.factors;
  const { rows } = structure;
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
