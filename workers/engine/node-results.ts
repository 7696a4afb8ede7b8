import type { FaultCurrents, MinimumState, NodeState } from '../../shared/schemas/study-result.ts';
import type { Impedance } from '../../shared/schemas/study.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { magnitude } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import { largestPhase, lineGroundFault, listBoltedFaults } from './faults.ts';
import { baseAmps, baseOhms } from './per-unit.ts';
import type { SolvedCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';

/* What a study reports of a node, in ohms and amperes. */

/** Gives impedances and the largest current of each fault at a node. */
export function reportNode(solved: SolvedCase, node: number): NodeState {
  const { baseMva, nodes } = solved.model;
  const { kv, phases } = nodes[node]!;
  const point = findFaultPoint(solved, node);
  const currents = largestCurrents(point, phases, baseAmps(baseMva, kv));
  if (phases !== allPhases) return currents;
  const ohms = baseOhms(baseMva, kv);
  const inOhms = (z: Complex | null | undefined): Impedance | null =>
    z ? { r: z.re * ohms, x: z.im * ohms } : null;
  return { z1: inOhms(point?.z1), z2: inOhms(point?.z2), z0: inOhms(point?.z0), ...currents };
}

/** Gives the smallest currents that protection must see: one line to ground through `faultOhm`, the others bolted. */
export function reportMinimum(solved: SolvedCase, node: number, faultOhm: number): MinimumState {
  const { baseMva, nodes } = solved.model;
  const { kv, phases } = nodes[node]!;
  const amps = baseAmps(baseMva, kv);
  const point = findFaultPoint(solved, node);
  const bolted = largestCurrents(point, phases, amps);
  const through = { re: faultOhm / baseOhms(baseMva, kv), im: 0 };
  const lineGround = point
    ? [0, 1, 2]
        .filter((phase) => phases & (1 << phase))
        .map((phase) => magnitude(lineGroundFault(point, phase, through).earth) * amps)
    : [0];
  return { threePhase: bolted.threePhase, lineGround: Math.max(...lineGround), lineLine: bolted.lineLine };
}

function largestCurrents(point: FaultPoint | undefined, phases: number, amps: number): FaultCurrents {
  const onePhase = phases === 1 || phases === 2 || phases === 4;
  const ofPair = onePhase ? null : 0;
  const largest = {
    threePhase: phases === allPhases ? 0 : null,
    lineGround: 0,
    lineLine: ofPair,
    lineLineGround: ofPair,
    lineLineGroundEarth: ofPair,
  };
  for (const fault of point ? listBoltedFaults(point) : []) {
    const current = largestPhase(fault) * amps;
    if (current <= largest[fault.kind]!) continue;
    largest[fault.kind] = current;
    // The earth current that goes with the worst pair of phases, which need not be the largest of its own kind.
    if (fault.kind === 'lineLineGround') largest.lineLineGroundEarth = magnitude(fault.earth) * amps;
  }
  return largest;
}
