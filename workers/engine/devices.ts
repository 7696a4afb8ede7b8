import type { DeviceDuty } from '../../shared/schemas/study-result.ts';
import type { Device } from '../../shared/schemas/study.ts';
import type { Branch, PhaseTriple } from './case.ts';
import type { Complex } from './complex.ts';
import { add, at, divide, multiply, scale, subtract, zero } from './complex.ts';
import type { Fault } from './faults.ts';
import { largestPhase, listBoltedFaults } from './faults.ts';
import { phasesAt } from './laterals.ts';
import { branchAt, nodeAt } from './model-parts.ts';
import { negativeTurn, phasesOf, sequencesOf } from './open-circuit.ts';
import { baseAmps } from './per-unit.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import { drivingPoint, transferOfPair } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';

/*
 * What a device must interrupt. For a fault just outside its branch it carries what the branch delivers to the node;
 * for one just inside, all the rest. The fault current is the same, so both follow from one fault at the node.
 */

/** Gives the duty of a device in one case; `fault` is null where nothing feeds the place. */
export function findDeviceDuty(solved: SolvedCase, device: Device): DeviceDuty {
  const { model } = solved;
  const branch = branchAt(model, model.branchIndex.get(device.branch)!);
  const node = branch[device.end];
  const amps = baseAmps(model.baseMva, nodeAt(model, node).kv);
  const point = findFaultPoint(solved, node);
  let duty: Pick<DeviceDuty, 'dutyA' | 'fault' | 'side'> = { dutyA: 0, fault: null, side: 'branch' };
  let availableA = 0;
  if (point) {
    const deliver = deliveryOf(solved, branch, device.end);
    for (const { kind, currents } of listBoltedFaults(point, branch.phases)) {
      const fromBranch = deliver(currents);
      const branchA = largestPhase({ currents: fromBranch }) * amps;
      const restA = largestPhase({ currents: subtractPhases(currents, fromBranch) }) * amps;
      availableA = Math.max(availableA, largestPhase({ currents }) * amps);
      if (branchA > duty.dutyA) duty = { dutyA: branchA, fault: kind, side: 'branch' };
      if (restA > duty.dutyA) duty = { dutyA: restA, fault: kind, side: 'rest' };
    }
  }
  const loading = (amperes: number) =>
    device.interruptingKa === undefined ? null : amperes / (device.interruptingKa * 1000);
  return { ...duty, loading: loading(duty.dutyA), availableA, availableLoading: loading(availableA) };
}

/** Gives the phase currents that a branch delivers to its end while that end is faulted, inverter current included. */
export function currentFromBranch(
  solved: SolvedCase,
  branch: Branch,
  end: 'from' | 'to',
  fault: Fault,
): PhaseTriple {
  return deliveryOf(solved, branch, end)(fault.currents);
}

/** As `currentFromBranch`, with what all faults at the end have in common found once. */
function deliveryOf(
  solved: SolvedCase,
  branch: Branch,
  end: 'from' | 'to',
): (faultCurrents: PhaseTriple) => PhaseTriple {
  const { busOf } = solved.topology;
  const far = end === 'from' ? 'to' : 'from';
  if (busOf[branch.from] !== -1 && busOf[branch.to] !== -1) return deliveryOfCoreBranch(solved, branch, end);
  return (faultCurrents) => currentFromLateral(solved, branch[end], branch[far], faultCurrents);
}

/** On a lateral the far side delivers its inverters' current, and the side of the tap all the rest. */
function currentFromLateral(
  solved: SolvedCase,
  node: number,
  farNode: number,
  faultCurrents: PhaseTriple,
): PhaseTriple {
  const { laterals } = solved.topology;
  const spot = laterals.spotOf[node]!;
  const farSpot = laterals.spotOf[farNode]!;
  const { spotFlow } = solved.openCircuit;
  const leadsAway = farSpot !== -1 && laterals.parent[farSpot] === spot;
  return leadsAway ? phasesAt(spotFlow, farSpot) : subtractPhases(faultCurrents, phasesAt(spotFlow, spot));
}

/** What a sequence brings over a branch: (drop + share·If)/z. */
type Delivery = { drop: Complex; share: Complex; z: Complex };

/*
 * In each sequence, with If out of node k and the branch's z to node m:
 *   I = (Vom − Vok)/z + (Zkk − Zmk)/z·If,  and at a star-delta transformer's earthed side I0 = (Z0kk·If0 − Vo0k)/z.
 */
function deliveryOfCoreBranch(
  { topology, networks, openCircuit }: SolvedCase,
  branch: Branch,
  end: 'from' | 'to',
): (faultCurrents: PhaseTriple) => PhaseTriple {
  const k = topology.busOf[branch[end]]!;
  const m = topology.busOf[branch[end === 'from' ? 'to' : 'from']]!;
  const { v1, v2, v0 } = openCircuit;
  const turnOfFar = negativeTurn(topology.clockHours[m]! - topology.clockHours[k]!);
  const series = (network: SequenceNetwork, z: Complex, drop: Complex): Delivery => {
    return { drop, share: subtract(drivingPoint(network, k), transferOfPair(network, k, m)), z };
  };
  const drop2 = subtract(multiply(at(v2, m), turnOfFar), at(v2, k));
  const positive = series(networks.positive, branch.z1, subtract(at(v1, m), at(v1, k)));
  const negative = series(networks.negative, branch.z1, drop2);
  const zeroSequence = findZeroSequence();
  return (faultCurrents) => {
    const { i1, i2, i0 } = sequencesOf(faultCurrents);
    return phasesOf(
      delivered(positive, i1),
      delivered(negative, i2),
      zeroSequence ? delivered(zeroSequence, i0) : zero,
    );
  };

  function findZeroSequence(): Delivery | undefined {
    const path = branch.zeroSequence;
    if (!networks.zero.hasPath[k]) return undefined;
    if (path.kind === 'series') {
      return series(networks.zero, path.z, subtract(at(v0, m), at(v0, k)));
    }
    if (path.kind === 'open' || path.end !== end) return undefined;
    return { drop: scale(at(v0, k), -1), share: drivingPoint(networks.zero, k), z: path.z };
  }
}

function delivered({ drop, share, z }: Delivery, faultCurrent: Complex): Complex {
  return divide(add(drop, multiply(share, faultCurrent)), z);
}

function subtractPhases(p: PhaseTriple, q: PhaseTriple): PhaseTriple {
  return [subtract(p[0], q[0]), subtract(p[1], q[1]), subtract(p[2], q[2])];
}
