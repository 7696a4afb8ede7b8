import type { FaultCurrentsAmps, RunSummary } from '../shared/schemas/runs.ts';
import type { FaultCurrents, StudyResult } from '../shared/schemas/study-result.ts';
import type { Study } from '../shared/schemas/study.ts';

function pickCurrents(state: FaultCurrents): FaultCurrentsAmps {
  const { threePhase, lineGround, lineLine, lineLineGround } = state;
  return { threePhase, lineGround, lineLine, lineLineGround };
}

/** What the reviewer's page shows beside the findings; null for a study without a project. */
export function summariseResult(study: Study, result: StudyResult): RunSummary | null {
  const { project, feeder } = study;
  if (project === undefined) return null;
  const node = feeder.nodes.find((candidate) => candidate.id === project.node);
  const currents = result.nodes[project.node];
  if (node === undefined || currents?.after === undefined) return null;
  return {
    poi: {
      node: node.id,
      kv: node.kv,
      before: pickCurrents(currents.before),
      after: pickCurrents(currents.after),
    },
    devices: (feeder.devices ?? []).flatMap((device) => {
      const duty = result.devices[device.id];
      if (duty?.after === undefined) return [];
      return [
        {
          id: device.id,
          kind: device.kind,
          circuit: device.circuit ?? null,
          interruptingKa: device.interruptingKa ?? null,
          beforeAmps: duty.before.dutyA,
          afterAmps: duty.after.dutyA,
          afterAvailableAmps: duty.after.availableA,
          afterAvailableLoading: duty.after.availableLoading,
        },
      ];
    }),
    nodeCount: feeder.nodes.length,
  };
}
