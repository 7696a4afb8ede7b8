import type { FaultKind } from '../../shared/schemas/study-result.ts';
import type { Model } from './case.ts';
import { changeImpedances } from './solve-alike.ts';
import type { TheveninCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';
import { findComplexXr } from './x-over-r.ts';

/*
 * R/X for κ in a network of several paths by the equivalent frequency, method (c) of IEC 60909-0, 8.1: reduce the network
 * with its reactances at fc = 20 Hz for 50 Hz (24 Hz for 60 Hz), then R/X = Rc/Xc·fc/f (value from memory).
 */

const frequencyRatio = 0.4;

/** The network at the equivalent frequency. */
export function atEquivalentFrequency(model: Model): Model {
  const slow = { re: (re: number) => re, im: (_: number, im: number) => im * frequencyRatio };
  return changeImpedances(model, { network: slow, path: slow });
}

/** Gives X/R by kind of fault from the network at the equivalent frequency; 0 where nothing feeds the node. */
export function findEquivalentXr(equivalent: TheveninCase, node: number): (kind: FaultKind) => number {
  const point = findFaultPoint(equivalent, node);
  return (kind) => (point ? findComplexXr(point, kind) / frequencyRatio : 0);
}
