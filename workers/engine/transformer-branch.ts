import type { Transformer } from '../../shared/schemas/study.ts';
import type { Belonging, Branch, ZeroSequencePath } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { add, polar, scale, zero } from './complex.ts';
import { baseOhms, earthing } from './per-unit.ts';

/**
 * Makes a branch of a two-winding transformer: |z1| = percent/100·ratedKvTo²/MVA in ohms on the `to` side, angle atan(X/R).
 * Example: 5 % of 1 MVA is 0.5 per unit of 10 MVA.
 */
export function transformerBranch(
  transformer: Transformer,
  baseMva: number,
  kvFrom: number,
  kvTo: number,
): Omit<Branch, 'from' | 'to' | keyof Belonging> {
  const { kva, connection, impedancePercent, xr } = transformer;
  // The percentage is on the rated voltage, which need not be the node's nominal one.
  const ratio = (transformer.ratedKvTo ?? kvTo) / kvTo;
  const size = (impedancePercent / 100) * ratio * ratio * ((baseMva * 1000) / kva);
  const z1 = polar(size, (Math.atan(xr) * 180) / Math.PI);
  const z0 = scale(z1, (transformer.zeroImpedancePercent ?? impedancePercent) / impedancePercent);
  const earthFrom = earthing(transformer.neutralFrom, baseOhms(baseMva, kvFrom));
  const earthTo = earthing(transformer.neutralTo, baseOhms(baseMva, kvTo));
  return {
    phases: allPhases,
    z1,
    zeroSequence: zeroSequenceOf(connection, z0, earthFrom, earthTo),
    self: zero,
    mutual: zero,
    clockHour: clockHourOf(connection),
  };
}

/** By how many times 30° `to` lags `from`: the number that a connection such as "Dyn11" ends with. */
export function clockHourOf(connection: string): number {
  return Number(/\d+$/.exec(connection)![0]);
}

/*
 * Zero-sequence equivalents of two-winding transformers (Grainger and Stevenson, 11.8; value from memory): current needs an
 * earthed star on its own side and, on the other, an earthed star to go on or a delta to circulate in.
 */
function zeroSequenceOf(
  connection: string,
  z0: Complex,
  earthFrom: Complex | null,
  earthTo: Complex | null,
): ZeroSequencePath {
  const [, from, to] = /^(YN|Y|D)(yn|y|d)/.exec(connection)!;
  const groundedFrom = from === 'YN' ? earthFrom : null;
  const groundedTo = to === 'yn' ? earthTo : null;
  if (groundedFrom && groundedTo) return { kind: 'series', z: add(z0, add(groundedFrom, groundedTo)) };
  if (groundedFrom && to === 'd') return { kind: 'shunt', end: 'from', z: add(z0, groundedFrom) };
  if (groundedTo && from === 'D') return { kind: 'shunt', end: 'to', z: add(z0, groundedTo) };
  return { kind: 'open' };
}
