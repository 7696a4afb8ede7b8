import type { FaultKind } from '../../shared/schemas/study-result.ts';
import type { Machine, Study } from '../../shared/schemas/study.ts';
import { largestXr, ratioOf } from './asymmetry.ts';
import type { Model, Shunt } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { add, complexArray, divide, multiply, scale, subtract, sum } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import { changeImpedances, solveAlike } from './solve-alike.ts';
import type { SolvedCase, TheveninCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';
import { eachElement } from './study-elements.ts';
import { wiringOf } from './wiring.ts';

/*
 * X/R at a fault. The direct current of a network with several paths fades with several time constants; X over R of
 * the complex Thevenin impedance can be far too small for it. IEEE C37.010 therefore reduces the network of
 * reactances alone and that of resistances alone, and takes the ratio of the two (common practice; value from memory).
 * On a radial circuit with one source both ways agree.
 */

/** The same network twice, as resistances alone and as reactances alone. */
export type SeparateModels = { resistances: Model; reactances: Model };

export type SeparateCases = { resistances: TheveninCase; reactances: TheveninCase };

/** Makes the two networks of the model of a study. */
export function separateModels(study: Study, model: Model): SeparateModels {
  const complete = { ...model, wiring: wiringOf(model), machines: completeResistances(study, model) };
  const none = () => 0;
  return {
    resistances: changeImpedances(complete, {
      // A resistance of zero would short-circuit the network, as would a reactance of zero.
      network: { re: (re, im) => Math.max(re, Math.abs(im) / largestXr), im: none },
      path: { re: (re) => re, im: none },
    }),
    reactances: changeImpedances(complete, {
      network: { re: none, im: (re, im) => (Math.abs(im) * largestXr < re ? re / largestXr : im) },
      path: { re: none, im: (_, im) => im },
    }),
  };
}

/** Solves both networks of the model of a case as they are in that case. */
export function reduceSeparately(models: SeparateModels, solved: SolvedCase): SeparateCases {
  const spare = complexArray(solved.topology.busCount);
  return {
    resistances: solveAlike(solved, models.resistances, spare),
    reactances: solveAlike(solved, models.reactances, spare),
  };
}

/** Gives X/R by kind of fault at a node, by separate reduction; 0 where nothing feeds the node. */
export function findSeparateXr(cases: SeparateCases, node: number): (kind: FaultKind) => number {
  const resistances = findFaultPoint(cases.resistances, node);
  const reactances = findFaultPoint(cases.reactances, node);
  return (kind) => {
    if (!resistances || !reactances) return 0;
    const r = loopImpedances(resistances, kind);
    const x = loopImpedances(reactances, kind);
    return Math.max(...r.map(({ re }, index) => ratioOf({ re, im: x[index]!.im })));
  };
}

/** Gives X/R of a fault from the complex Thevenin impedances. */
export function findComplexXr(point: FaultPoint, kind: FaultKind): number {
  return Math.max(...loopImpedances(point, kind).map(ratioOf));
}

/**
 * Gives the impedance that drives a fault: Z1; Z1 + Z2; Z0 + Z1 + Z2; Z1 + Z2·Z0/(Z2 + Z0), each with what a lateral
 * adds. Two lines to ground on a lateral have no such single loop: both of its parts are given, and the larger X/R decides.
 */
function loopImpedances(point: FaultPoint, kind: FaultKind): Complex[] {
  const { z1, z2, z0, self, mutual } = point;
  const lineLine = sum(z1, z2, scale(subtract(self, mutual), 2));
  if (kind === 'threePhase') return [z1];
  if (kind === 'lineLine' || !z0) return [lineLine];
  const lineGround = sum(z0, z1, z2, scale(self, 3));
  if (kind === 'lineGround') return [lineGround];
  return point.phases === allPhases
    ? [add(z1, divide(multiply(z2, z0), add(z2, z0)))]
    : [lineLine, lineGround];
}

/*
 * R/X of machines whose resistance is not given, for the direct current alone: the fictitious resistances that
 * IEC 60909-0 puts into generators, and its RM/XM of motors (values from memory). Without any, one machine would
 * short-circuit the network of resistances.
 */
function usualRatio({ kind, kva }: Machine, kv: number): number {
  if (kind === 'induction') return kv <= 1 ? 0.42 : 0.15;
  if (kv <= 1) return 0.15;
  return kva < 100_000 ? 0.07 : 0.05;
}

/** The model's machines, which come in the order of the study's, with a resistance each in all three sequences. */
function completeResistances(study: Study, { machines, nodes }: Model): Shunt[] {
  const given = Array.from(eachElement(study, 'machines'), ({ element }) => element);
  return machines.map((shunt, index) => {
    const machine = given[index]!;
    if (machine.rPu !== undefined || !shunt.z1) return shunt;
    const r = { re: usualRatio(machine, nodes[shunt.node]!.kv) * shunt.z1.im, im: 0 };
    return {
      ...shunt,
      z1: add(shunt.z1, r),
      z2: shunt.z2 && add(shunt.z2, r),
      z0: shunt.z0 && add(shunt.z0, r),
    };
  });
}
