import type { LineConstants } from '../../shared/schemas/study-result.ts';
import type { Construction, Impedance, Line, Study } from '../../shared/schemas/study.ts';
import type { Complex } from './complex.ts';
import { buildPrimitiveMatrix, meansOf, reduceToFirst } from './line-constants.ts';
import { percentFromTransposed } from './line-transposition.ts';
import type { WireLibrary } from './line-wires.ts';
import { listWires } from './line-wires.ts';

/** Of lines of one construction and one set of phases. */
export type ComputedLine = LineConstants & { percentFromTransposed: number };

/** Gives the impedances of a line that names a construction. */
export type LineCalculator = (line: Line & { construction: string }) => ComputedLine;

/** Makes a calculator that works out each construction once for each choice of phases; the study must be checked. */
export function lineCalculator({ feeder, frequencyHz }: Study): LineCalculator {
  const library: WireLibrary = { conductors: byId(feeder.conductors), cables: byId(feeder.cables) };
  const constructions = byId(feeder.constructions);
  const known = new Map<Construction, Map<string, ComputedLine>>();
  return ({ construction: id, phases }) => {
    const construction = constructions.get(id)!;
    const ofPhases = known.get(construction) ?? new Map<string, ComputedLine>();
    known.set(construction, ofPhases);
    const computed = ofPhases.get(phases) ?? computeLine(construction, phases, library, frequencyHz);
    ofPhases.set(phases, computed);
    return computed;
  };
}

/** Ohms per km. */
export type LineImpedances = { z1: Impedance; z0: Impedance };

/** Tells z1 and z0 of any line, given or computed. */
export function lineImpedances(study: Study): (line: Line) => LineImpedances {
  const calculate = lineCalculator(study);
  return (line) => (isConstructed(line) ? calculate(line) : (line as LineImpedances));
}

export function isConstructed(line: Line): line is Line & { construction: string } {
  return line.construction !== undefined;
}

function computeLine(
  construction: Construction,
  phases: string,
  library: WireLibrary,
  frequencyHz: number,
): ComputedLine {
  const wires = listWires(construction, phases, library);
  const primitive = buildPrimitiveMatrix(wires, frequencyHz, construction.earthOhmM);
  const matrix = reduceToFirst(primitive, phases.length);
  const means = meansOf(matrix);
  return {
    zPerKm: matrix.map((row) => row.map(toImpedance)),
    z1: toImpedance(means.z1),
    z0: toImpedance(means.z0),
    percentFromTransposed: percentFromTransposed(matrix, means),
  };
}

function toImpedance({ re, im }: Complex): Impedance {
  return { r: re, x: im };
}

function byId<T extends { id: string }>(list: readonly T[] = []): Map<string, T> {
  return new Map(list.map((element) => [element.id, element]));
}
