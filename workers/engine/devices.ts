import type { DeviceDuty } from '../../shared/schemas/study-result.ts';
import type { Device } from '../../shared/schemas/study.ts';
import type { Branch, PhaseTriple } from './case.ts';
import type { Complex } from './complex.ts';
import { add, at, divide, multiply, subtract, zero } from './complex.ts';
import type { Fault } from './faults.ts';
import { largestPhase, listBoltedFaults } from './faults.ts';
import { phasesAt } from './laterals.ts';
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
  const branch = model.branches[model.branchIndex.get(device.branch)!]!;
  const node = branch[device.end];
  const amps = baseAmps(model.baseMva, model.nodes[node]!.kv);
  const point = findFaultPoint(solved, node);
  let duty: Pick<DeviceDuty, 'dutyA' | 'fault' | 'side'> = { dutyA: 0, fault: null, side: 'branch' };
  let availableA = 0;
  for (const fault of point ? listBoltedFaults(point, branch.phases) : []) {
    availableA = Math.max(availableA, largestPhase(fault) * amps);
    const fromBranch = currentFromBranch(solved, branch, device.end, fault);
    const fromRest = subtractPhases(fault.currents, fromBranch);
    for (const [side, currents] of [
      ['branch', fromBranch],
      ['rest', fromRest],
    ] as const) {
      const amperes = largestPhase({ currents }) * amps;
      if (amperes > duty.dutyA) duty = { dutyA: amperes, fault: fault.kind, side };
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
  const { busOf } = solved.topology;
  const far = end === 'from' ? 'to' : 'from';
  if (busOf[branch.from] !== -1 && busOf[branch.to] !== -1) {
    return currentFromCoreBranch(solved, branch, end, fault);
  }
  return currentFromLateral(solved, branch[end], branch[far], fault);
}

/** On a lateral the far side delivers its inverters' current, and the side of the tap all the rest. */
function currentFromLateral(solved: SolvedCase, node: number, farNode: number, fault: Fault): PhaseTriple {
  const { laterals } = solved.topology;
  const spot = laterals.spotOf[node]!;
  const farSpot = laterals.spotOf[farNode]!;
  const { spotFlow } = solved.openCircuit;
  const leadsAway = farSpot !== -1 && laterals.parent[farSpot] === spot;
  return leadsAway ? phasesAt(spotFlow, farSpot) : subtractPhases(fault.currents, phasesAt(spotFlow, spot));
}

/*
 * In each sequence, with If out of node k and the branch's z to node m:
 *   I = (Vom − Vok)/z + (Zkk − Zmk)/z·If,  and at a star-delta transformer's earthed side I0 = (Z0kk·If0 − Vo0k)/z.
 */
function currentFromCoreBranch(
  solved: SolvedCase,
  branch: Branch,
  end: 'from' | 'to',
  fault: Fault,
): PhaseTriple {
  const { topology, networks, openCircuit } = solved;
  const k = topology.busOf[branch[end]]!;
  const m = topology.busOf[branch[end === 'from' ? 'to' : 'from']]!;
  const { i1, i2, i0 } = sequencesOf(fault.currents);
  const { v1, v2, v0 } = openCircuit;
  const turnOfFar = negativeTurn(topology.clockHours[m]! - topology.clockHours[k]!);
  const path = branch.zeroSequence;
  return phasesOf(
    seriesCurrent(networks.positive, k, m, branch.z1, i1, subtract(at(v1, m), at(v1, k))),
    seriesCurrent(
      networks.negative,
      k,
      m,
      branch.z1,
      i2,
      subtract(multiply(at(v2, m), turnOfFar), at(v2, k)),
    ),
    zeroSequenceCurrent(),
  );

  function zeroSequenceCurrent(): Complex {
    if (!networks.zero.hasPath[k]) return zero;
    if (path.kind === 'series') {
      return seriesCurrent(networks.zero, k, m, path.z, i0, subtract(at(v0, m), at(v0, k)));
    }
    if (path.kind === 'open' || path.end !== end) return zero;
    return divide(subtract(multiply(drivingPoint(networks.zero, k), i0), at(v0, k)), path.z);
  }
}

function seriesCurrent(
  network: SequenceNetwork,
  k: number,
  m: number,
  z: Complex,
  faultCurrent: Complex,
  prefaultDrop: Complex,
): Complex {
  const share = subtract(drivingPoint(network, k), transferOfPair(network, k, m));
  return divide(add(prefaultDrop, multiply(share, faultCurrent)), z);
}

function subtractPhases(p: PhaseTriple, q: PhaseTriple): PhaseTriple {
  return [subtract(p[0], q[0]), subtract(p[1], q[1]), subtract(p[2], q[2])];
}
