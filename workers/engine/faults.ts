import type { FaultKind } from '../../shared/schemas/study-result.ts';
import type { PhaseTriple } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';
import { a, a2, add, divide, magnitude, multiply, scale, subtract, sum, zero } from './complex.ts';
import { phasesOf, sequencesOf } from './open-circuit.ts';

/*
 * Fault currents at one place, from its Thevenin equivalent in phase coordinates:
 *   Zpp = (Z0 + Z1 + Z2)/3, Zpq = (Z0 + a·Z1 + a²·Z2)/3 for q next after p, (Z0 + a²·Z1 + a·Z2)/3 for q before p,
 * which is A·diag(Z0, Z1, Z2)·A⁻¹, plus the self and mutual impedance of the lateral path, if the place is on one.
 * (Grainger and Stevenson, chapter 12, gives the same results through connected sequence networks; value from memory.)
 */

/** A place as a fault finds it; all per unit, local. */
export type FaultPoint = {
  phases: number;
  z1: Complex;
  z2: Complex;
  /** null where the zero sequence is open. */
  z0: Complex | null;
  /** Of the path from the tap; zero in the core. */
  self: Complex;
  mutual: Complex;
  /** Open-circuit voltage of each phase. */
  voltage: PhaseTriple;
  /** Whether the open-circuit voltages are alike but for 120°. */
  balanced: boolean;
};

export type Fault = {
  kind: FaultKind;
  /** Out of the network into the fault, by phase. */
  currents: PhaseTriple;
  /** Into earth: the sum of the phases. */
  earth: Complex;
};

const nextPhase = [1, 2, 0] as const;

/**
 * Lists the bolted faults of a place, each choice of phases that it has; where the voltages are balanced and all
 * phases are there, one choice stands for its like.
 * Example: Z1 = Z2 = Z0 = j1 and E = 1 give three-phase and line-to-ground currents of 1.
 */
export function listBoltedFaults(point: FaultPoint, phases = point.phases): Fault[] {
  const faults: Fault[] = [];
  if (phases === allPhases) faults.push(threePhaseFault(point));
  const choices = point.balanced && phases === allPhases ? 1 : 3;
  for (let p = 0; p < choices; p++) {
    if (phases & (1 << p)) faults.push(lineGroundFault(point, p, zero));
  }
  for (let p = 0; p < choices; p++) {
    const q = nextPhase[p]!;
    if (!(phases & (1 << p)) || !(phases & (1 << q))) continue;
    faults.push(lineLineFault(point, p, q), lineLineGroundFault(point, p, q));
  }
  return faults;
}

/** The largest phase current of a fault. */
export function largestPhase({ currents }: { currents: PhaseTriple }): number {
  return Math.max(magnitude(currents[0]), magnitude(currents[1]), magnitude(currents[2]));
}

/** All three phases to each other and to ground: I(s) = V(s)/Z(s); only one-phase inverters make V2 and V0. */
function threePhaseFault({ z1, z2, z0, voltage }: FaultPoint): Fault {
  const { i1: v1, i2: v2, i0: v0 } = sequencesOf(voltage);
  const i0 = z0 ? divide(v0, z0) : zero;
  return { kind: 'threePhase', currents: phasesOf(divide(v1, z1), divide(v2, z2), i0), earth: scale(i0, 3) };
}

/** I = Vp/(Zpp + Zf); with balanced voltages 3·E/(Z0 + Z1 + Z2 + 3·Zf). */
export function lineGroundFault(point: FaultPoint, p: number, faultImpedance: Complex): Fault {
  if (!point.z0) return { kind: 'lineGround', currents: [zero, zero, zero], earth: zero };
  const current = divide(point.voltage[p]!, add(selfImpedance(point, point.z0), faultImpedance));
  return { kind: 'lineGround', currents: onPhases(p, current), earth: current };
}

/** I = (Vp − Vq)/(Z1 + Z2 + 2·(self − mutual)). */
export function lineLineFault(point: FaultPoint, p: number, q: number): Fault {
  const loop = sum(point.z1, point.z2, scale(subtract(point.self, point.mutual), 2));
  const current = divide(subtract(point.voltage[p]!, point.voltage[q]!), loop);
  return { kind: 'lineLine', currents: onPhases(p, current, q, scale(current, -1)), earth: zero };
}

/** Solves [Zpp Zpq; Zqp Zqq]·[Ip; Iq] = [Vp; Vq], q being the phase after p. */
function lineLineGroundFault(point: FaultPoint, p: number, q: number): Fault {
  if (!point.z0) return { ...lineLineFault(point, p, q), kind: 'lineLineGround' };
  const { z0, z1, z2, mutual, voltage } = point;
  const coupling = (turn1: Complex, turn2: Complex) =>
    add(scale(sum(z0, multiply(turn1, z1), multiply(turn2, z2)), 1 / 3), mutual);
  const zpp = selfImpedance(point, z0);
  const zpq = coupling(a, a2);
  const zqp = coupling(a2, a);
  const determinant = subtract(multiply(zpp, zpp), multiply(zpq, zqp));
  const [vp, vq] = [voltage[p]!, voltage[q]!];
  const ip = divide(subtract(multiply(zpp, vp), multiply(zpq, vq)), determinant);
  const iq = divide(subtract(multiply(zpp, vq), multiply(zqp, vp)), determinant);
  return { kind: 'lineLineGround', currents: onPhases(p, ip, q, iq), earth: add(ip, iq) };
}

function selfImpedance(point: FaultPoint, z0: Complex): Complex {
  return add(scale(sum(z0, point.z1, point.z2), 1 / 3), point.self);
}

function onPhases(p: number, ofP: Complex, q = -1, ofQ: Complex = zero): PhaseTriple {
  const of = (phase: number) => (phase === p ? ofP : phase === q ? ofQ : zero);
  return [of(0), of(1), of(2)];
}
