import type { FaultKind } from '../../shared/schemas/study-result.ts';
import type { Complex } from './complex.ts';
import { add, scale } from './complex.ts';
import type { Fault, FaultPoint } from './faults.ts';
import { listBoltedFaults } from './faults.ts';

/*
 * Faults through an impedance Zf: once in each phase of a three-phase fault, once between two phases, once from the phase,
 * or from the two joined phases, to ground (H. Saadat, Power System Analysis, chapter 10; J. J. Grainger,
 * W. D. Stevenson, chapter 12). To the bolted fault it is a place that is further away:
 *   three-phase  Z1 + Zf, Z2 + Zf, Z0 + Zf      line to line            Z1 + Zf/2, Z2 + Zf/2
 *   line to ground and two lines to ground      Z0 + 3·Zf
 */

/**
 * Lists the faults of one kind at a place through `zf`, per unit.
 * Example: Z1 = Z2 = j0.22, Z0 = j0.35, Zf = j0.1 give 2.7523 from line to ground.
 */
export function listFaultsThrough(point: FaultPoint, kind: FaultKind, zf: Complex): Fault[] {
  return listBoltedFaults(moveAway(point, kind, zf)).filter((fault) => fault.kind === kind);
}

function moveAway(point: FaultPoint, kind: FaultKind, zf: Complex): FaultPoint {
  const { z1, z2, z0 } = point;
  if (kind === 'threePhase') return { ...point, z1: add(z1, zf), z2: add(z2, zf), z0: z0 && add(z0, zf) };
  if (kind === 'lineLine') {
    const half = scale(zf, 0.5);
    return { ...point, z1: add(z1, half), z2: add(z2, half) };
  }
  return { ...point, z0: z0 && add(z0, scale(zf, 3)) };
}
