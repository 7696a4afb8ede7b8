import type { DeviceDuty, DeviceResult, WorstCase } from '../../shared/schemas/study-result.ts';
import type { Device, Study } from '../../shared/schemas/study.ts';
import type { Model } from './case.ts';
import { isInService } from './case.ts';
import { findDeviceAsymmetry } from './device-asymmetry.ts';
import { findDeviceDuty } from './devices.ts';
import { branchAt, nodeAt } from './model-parts.ts';
import type { DutyState, OperatingCases, StateSolver } from './state-solver.ts';

/** Reports the duty of every device of the feeder, by id: that of the model as it stands, and the scenario that is worse. */
export function reportDevices(
  study: Study,
  model: Model,
  { base, scenarios }: OperatingCases,
): Record<string, DeviceResult> {
  const states: DutyState[] = study.project ? ['before', 'after'] : ['before'];
  return Object.fromEntries(
    (study.feeder.devices ?? []).map((device) => {
      const before = reportDuty(model, base, 'before', device);
      const after = study.project ? reportDuty(model, base, 'after', device) : undefined;
      const most = Math.max(before.availableA, after?.availableA ?? 0);
      const worst = findWorst(model, scenarios, states, device, most);
      return [device.id, { before, ...(after && { after }), ...(worst && { worst }) }];
    }),
  );
}

function reportDuty(model: Model, solver: StateSolver, state: DutyState, device: Device): DeviceDuty {
  const branch = branchAt(model, model.branchIndex.get(device.branch)!);
  const duty = solver.solveDuty(state, nodeAt(model, branch[device.end]).kv);
  // X/R says something of a rating; without one, two more networks would be solved for nothing.
  const asymmetry = device.interruptingKa === undefined ? undefined : findDeviceAsymmetry(duty, device);
  return { ...findDeviceDuty(duty.solved, device), ...asymmetry };
}

/** What is more only by rounding is not worse. */
const margin = 1 + 1e-9;

/** Finds the scenario and state with the most current at a device, if that is more than `most`. */
function findWorst(
  model: Model,
  scenarios: readonly StateSolver[],
  states: readonly DutyState[],
  device: Device,
  most: number,
): WorstCase | undefined {
  if (scenarios.length === 0) return undefined;
  const branch = branchAt(model, model.branchIndex.get(device.branch)!);
  const { kv } = nodeAt(model, branch[device.end]);
  let worst: WorstCase | undefined;
  for (const { scenario, solveDuty } of scenarios) {
    for (const state of states) {
      const { solved } = solveDuty(state, kv);
      // The device goes with its branch.
      if (!scenario || !isInService(model, solved.choice, branch)) continue;
      const { availableA, availableLoading, dutyA, loading } = findDeviceDuty(solved, device);
      if (availableA <= (worst?.availableA ?? most) * margin) continue;
      worst = { scenario: scenario.id, state, availableA, availableLoading, dutyA, loading };
    }
  }
  return worst;
}
