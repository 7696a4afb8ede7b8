import type { Complex } from './complex.ts';
import { divide, multiply, scale, subtract, sum } from './complex.ts';
import { kmPerMile, metresPerFoot } from './line-units.ts';

/*
 * Impedance of a line from its wires: Carson's equations, cut after the first terms, and Kron's reduction
 * (W. H. Kersting, Distribution System Modeling and Analysis, chapter 4; constants as there, value from memory).
 * The equations are in US units and stay so here; what goes in and comes out is in metres and ohms per km.
 */

/** Of the earth's return path, in ohms per mile and Hz. */
const earthResistance = 1.58836e-3;
/** Of every logarithm, in ohms per mile and Hz. */
const reactanceFactor = 2.02237e-3;
/** What the earth adds to the logarithm at 1 ohm-metre and 1 Hz, with distances in feet. */
const earthLogarithm = 7.6786;

/** A conductor, or the strands or tape around a cable's core taken as one. */
export type Wire = {
  ohmPerKm: number;
  gmrM: number;
  /** Which place of the construction it belongs to. */
  place: number;
  xM: number;
  yM: number;
  /** Of strands or tape, the radius at which they lie around the core; 0 of a core and of a bare conductor. */
  ringRadiusM: number;
};

/** Rows and columns in one order, ohms per km. */
export type ComplexMatrix = readonly (readonly Complex[])[];

/**
 * Builds the impedance matrix of wires that all return through earth, in ohms per km:
 * z_ii = r_i + 0.00158836·f + j·0.00202237·f·(ln(1/GMR_i) + 7.6786 + ½·ln(ρ/f)), z_ij the same without r_i and with the
 * distance D_ij for GMR_i, both in ohms per mile with GMR and D in feet, f in Hz and ρ in ohm-metres.
 * At 60 Hz and 100 ohm-metres z_ij = 0.09530 + j·0.12134·(ln(1/D_ij) + 7.93402) ohms per mile.
 */
export function buildPrimitiveMatrix(
  wires: readonly Wire[],
  frequencyHz: number,
  earthOhmM: number,
): Complex[][] {
  const earth = earthLogarithm + 0.5 * Math.log(earthOhmM / frequencyHz);
  const ohmPerKm = (r: number, distanceM: number): Complex => ({
    re: r + (earthResistance * frequencyHz) / kmPerMile,
    im: ((reactanceFactor * frequencyHz) / kmPerMile) * (Math.log(metresPerFoot / distanceM) + earth),
  });
  return wires.map((wire) =>
    wires.map((other) =>
      wire === other ? ohmPerKm(wire.ohmPerKm, wire.gmrM) : ohmPerKm(0, distanceBetween(wire, other)),
    ),
  );
}

/** Between centres; a core is as far from its own strands or tape as these lie around it. */
function distanceBetween(wire: Wire, other: Wire): number {
  if (wire.place === other.place) return Math.max(wire.ringRadiusM, other.ringRadiusM);
  return Math.hypot(wire.xM - other.xM, wire.yM - other.yM);
}

/**
 * Folds all rows and columns from `kept` on into the first ones, one after the other, for wires that are earthed at both
 * ends and so have no voltage: z_ij − z_ik·z_kj/z_kk. Keeps symmetry to the last bit.
 */
export function reduceToFirst(matrix: ComplexMatrix, kept: number): Complex[][] {
  let reduced = matrix.map((row) => [...row]);
  for (let k = matrix.length - 1; k >= kept; k--) {
    const pivot = reduced[k]![k]!;
    const last = reduced[k]!;
    reduced = reduced
      .slice(0, k)
      .map((row) => row.slice(0, k).map((z, j) => subtract(z, divide(multiply(row[k]!, last[j]!), pivot))));
  }
  return reduced;
}

export type SequenceMeans = { self: Complex; mutual: Complex; z1: Complex; z0: Complex };

/**
 * Takes a line as if transposed: zs and zm are the means of the diagonal and of the rest, z1 = zs − zm, z0 = zs + 2·zm.
 * A single phase has no zm: 0, so that z1 = z0 = zs.
 */
export function meansOf(matrix: ComplexMatrix): SequenceMeans {
  const size = matrix.length;
  const self = scale(sum(...matrix.map((row, i) => row[i]!)), 1 / size);
  const others = matrix.flatMap((row, i) => row.filter((_, j) => j !== i));
  const mutual = others.length > 0 ? scale(sum(...others), 1 / others.length) : { re: 0, im: 0 };
  return { self, mutual, z1: subtract(self, mutual), z0: sum(self, scale(mutual, 2)) };
}
