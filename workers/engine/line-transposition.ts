import { magnitude, subtract } from './complex.ts';
import type { ComplexMatrix, SequenceMeans } from './line-constants.ts';

/** Up to here the means stand for every phase, and nothing is said (common practice, no source). */
export const transposedWithinPercent = 5;

/**
 * Says how far from transposed a line is, in percent: the largest distance of a diagonal element from the diagonal's mean
 * zs, or of another element from the mean zm of these, as a share of |z1| = |zs − zm|.
 * Of z1, because that is what a fault between phases sees, and because zm of a cable can be next to nothing.
 * A single phase: 0. Phases at 0, 2.5 and 7 ft (IEEE configuration 601): 10.4.
 */
export function percentFromTransposed(matrix: ComplexMatrix, { self, mutual, z1 }: SequenceMeans): number {
  let largest = 0;
  matrix.forEach((row, i) =>
    row.forEach((z, j) => {
      largest = Math.max(largest, magnitude(subtract(z, i === j ? self : mutual)));
    }),
  );
  return (100 * largest) / magnitude(z1);
}
