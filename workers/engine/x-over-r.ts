import type { FaultKind } from '../../shared/schemas/study-result.ts';
import type { Machine, Study } from '../../shared/schemas/study.ts';
import { largestXr, ratioOf } from './asymmetry.ts';
import type { Model, Shunt } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { add, divide, multiply, scale, subtract, sum } from './complex.ts';
import { ElementList } from './element-list.ts';
import type { FaultPoint } from './faults.ts';
import { modelAlike, nodeAt } from './model-parts.ts';
import type { RealPart } from './real-networks.ts';
import { solveRealNetwork } from './real-networks.ts';
import { ofSequences } from './sequence-networks.ts';
import { changeImpedances } from './solve-alike.ts';
import type { SolvedCase, TheveninCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';
import { wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

/*
 * X/R at a fault. The direct current of a network with several paths fades with several time constants; X over R of
 * the complex Thevenin impedance can be far too small for it. IEEE C37.010 therefore reduces the network of
 * reactances alone and that of resistances alone, and takes the ratio of the two (common practice; value from memory).
 * On a radial circuit with one source both ways agree.
 */

/** The same network twice, as resistances alone and as reactances alone. */
export type SeparateModels = {
  /** The network as it is, with a resistance in each machine. */
  readonly complete: Model;
  /** Made when they are first asked for. */
  readonly resistances: Model;
  readonly reactances: Model;
};

export type SeparateCases = { resistances: TheveninCase; reactances: TheveninCase };

// A resistance of zero would short-circuit the network, as would a reactance of zero.
const resistanceOf: RealPart = (re, im) => Math.max(re, Math.abs(im) / largestXr);
const reactanceOf: RealPart = (re, im) => (Math.abs(im) * largestXr < re ? re / largestXr : im);

/** Makes the two networks of the model of a study. */
export function separateModels(study: Study, model: Model): SeparateModels {
  const complete = modelAlike(model, {
    wiring: wiringOf(model),
    machines: completeResistances(study, model),
  });
  const none = () => 0;
  let resistances: Model | undefined;
  let reactances: Model | undefined;
  return {
    complete,
    get resistances() {
      return (resistances ??= changeImpedances(complete, {
        network: { re: resistanceOf, im: none },
        path: { re: (re) => re, im: none },
      }));
    },
    get reactances() {
      return (reactances ??= changeImpedances(complete, {
        network: { re: none, im: reactanceOf },
        path: { re: none, im: (_, im) => im },
      }));
    },
  };
}

/** Solves both networks of the model of a case as they are in that case. */
export function reduceSeparately(
  { complete }: Pick<SeparateModels, 'complete'>,
  { choice, topology, paths, openCircuit }: SolvedCase,
  arrays: Arrays = newArrays,
): SeparateCases {
  const spare = arrays.floats(topology.busCount);
  const wiring = wiringOf(complete);
  const solved = ofSequences(complete, choice, topology, (sequence, feeds) => {
    const whole = { topology, wiring, isZero: sequence === 'z0', feeds };
    return {
      resistances: solveRealNetwork(whole, resistanceOf, arrays, spare),
      reactances: solveRealNetwork(whole, reactanceOf, arrays, spare),
    };
  });
  const zeros = arrays.zeros(topology.busCount);
  const noPaths = arrays.zeros(topology.laterals.tap.length);
  const resistancesIn = ({ resistances: { values, hasPath } }: typeof solved.zero) => {
    return { z: { re: values, im: zeros }, hasPath };
  };
  const reactancesIn = ({ reactances: { values, hasPath } }: typeof solved.zero) => {
    return { z: { re: zeros, im: values }, hasPath };
  };
  const caseOf = (
    networkIn: typeof resistancesIn,
    pathOf: (path: ComplexArray) => ComplexArray,
  ): TheveninCase => ({
    topology,
    openCircuit,
    networks: {
      positive: networkIn(solved.positive),
      negative: networkIn(solved.negative),
      zero: networkIn(solved.zero),
    },
    paths: { self: pathOf(paths.self), mutual: pathOf(paths.mutual) },
  });
  return {
    resistances: caseOf(resistancesIn, ({ re }) => ({ re, im: noPaths })),
    reactances: caseOf(reactancesIn, ({ im }) => ({ re: noPaths, im })),
  };
}

/** Gives X/R by kind of fault at a node, by separate reduction; 0 where nothing feeds the node. */
export function findSeparateXr(cases: SeparateCases, node: number): (kind: FaultKind) => number {
  return compareSeparately(findFaultPoint(cases.resistances, node), findFaultPoint(cases.reactances, node));
}

/** The same from what the two networks are at the node. */
export function compareSeparately(
  resistances: FaultPoint | undefined,
  reactances: FaultPoint | undefined,
): (kind: FaultKind) => number {
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
function completeResistances(study: Study, model: Model): Shunt[] {
  const { elements: given } = new ElementList(study, 'machines');
  return model.machines.map((shunt, index): Shunt => {
    const machine = given[index]!;
    if (machine.rPu !== undefined || !shunt.z1) return shunt;
    const r = { re: usualRatio(machine, nodeAt(model, shunt.node).kv) * shunt.z1.im, im: 0 };
    return {
      ...shunt,
      z1: add(shunt.z1, r),
      z2: shunt.z2 && add(shunt.z2, r),
      z0: shunt.z0 && add(shunt.z0, r),
    };
  });
}
