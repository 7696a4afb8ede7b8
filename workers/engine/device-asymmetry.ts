import type { DeviceAsymmetry } from '../../shared/schemas/study-result.ts';
import type { Device } from '../../shared/schemas/study.ts';
import { asymmetryFactor, kappa, peakFactor } from './asymmetry.ts';
import { largestPhase, listBoltedFaults } from './faults.ts';
import { findEquivalentXr } from './iec60909-peak.ts';
import { branchAt, nodeAt } from './model-parts.ts';
import { baseAmps } from './per-unit.ts';
import { ratingFactor } from './rating-basis.ts';
import type { SolvedCase } from './solve-case.ts';
import { findFaultPoint } from './solve-case.ts';
import type { DutyCase } from './state-solver.ts';
import { findComplexXr, findSeparateXr } from './x-over-r.ts';

/* What the first cycles add to the current that a device must interrupt. */

/** Gives X/R, asymmetry and peak of the whole fault current at a device. Nothing where nothing feeds the place. */
export function findDeviceAsymmetry(duty: DutyCase, device: Device): DeviceAsymmetry | undefined {
  const place = placeOf(duty.solved, device);
  const service = { kv: place.kv, frequencyHz: duty.frequencyHz };
  const separate = findSeparateXr(duty.separate(), place.node);
  const equivalent = duty.equivalent && findEquivalentXr(duty.equivalent(), place.node);
  const faults = listFaults(duty.solved, place).map((fault) => {
    const xrSeparate = separate(fault.kind);
    return { ...fault, xrSeparate, asymmetry: asymmetryFactor(xrSeparate) };
  });
  if (faults.length === 0) return undefined;
  const worst = faults.reduce((p, q) => (q.amperes * q.asymmetry > p.amperes * p.asymmetry ? q : p));
  const largest = (factor: (fault: (typeof faults)[number]) => number) =>
    Math.max(...faults.map((fault) => fault.amperes * factor(fault)));
  const { interruptingKa } = device;
  return {
    xr: worst.xr,
    xrSeparate: worst.xrSeparate,
    asymmetry: worst.asymmetry,
    peakA: largest(({ kind, xrSeparate }) =>
      equivalent ? Math.SQRT2 * kappa(equivalent(kind)) : peakFactor(xrSeparate),
    ),
    correctedLoading:
      interruptingKa === undefined
        ? null
        : largest(({ xrSeparate }) => ratingFactor(device, service, xrSeparate)) / (interruptingKa * 1000),
  };
}

/** The current of a fault, by how much its X/R makes it count more against a rating, and that X/R. */
export type CountedFault = { amperes: number; factor: number; xr: number };

/**
 * Finds the fault at a device that weighs most against its rating. X/R is that of `duty`, the currents are those of
 * `solved`, which may have other inverters in.
 */
export function findCountedFault(duty: DutyCase, solved: SolvedCase, device: Device): CountedFault {
  const place = placeOf(solved, device);
  const service = { kv: place.kv, frequencyHz: duty.frequencyHz };
  const separate = findSeparateXr(duty.separate(), place.node);
  let worst: CountedFault = { amperes: 0, factor: 1, xr: 0 };
  for (const { kind, amperes } of listFaults(solved, place)) {
    const xr = separate(kind);
    const factor = ratingFactor(device, service, xr);
    if (amperes * factor > worst.amperes * worst.factor) worst = { amperes, factor, xr };
  }
  return worst;
}

type Place = { node: number; kv: number; phases: number };

function placeOf({ model }: SolvedCase, device: Device): Place {
  const branch = branchAt(model, model.branchIndex.get(device.branch)!);
  const node = branch[device.end];
  return { node, kv: nodeAt(model, node).kv, phases: branch.phases };
}

function listFaults(solved: SolvedCase, { node, kv, phases }: Place) {
  const point = findFaultPoint(solved, node);
  if (!point) return [];
  const amps = baseAmps(solved.model.baseMva, kv);
  return listBoltedFaults(point, phases).map((fault) => ({
    kind: fault.kind,
    amperes: largestPhase(fault) * amps,
    xr: findComplexXr(point, fault.kind),
  }));
}
