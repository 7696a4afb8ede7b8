import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { Study } from '../../shared/schemas/study.ts';
import { findRoom } from '../engine/room/room.ts';
import { makeNetwork } from './networks.ts';

/** A feeder of a thousand nodes with what room asks for: loads of every section, and some generation that is there already. */
export function makeLoadedNetwork(nodes: number): Study {
  const { project: _, ...study } = makeNetwork('radial', nodes);
  const { feeder } = study;
  const sectionOf = (device: string, share: number) => ({
    id: `section-${device}`,
    device,
    peakKw: 14_000 * share,
    minimumKw: 4000 * share,
    daytimeFixedKw: 5000 * share,
    daytimeTrackingKw: 4500 * share,
    groundedLoadShare: 0.8,
  });
  const devices = (feeder.devices ?? []).map((device) => ({
    ...device,
    kind: 'recloser',
    interruptingKa: 16,
    testXr: 15,
  }));
  return {
    ...study,
    feeder: {
      ...feeder,
      devices,
      machines: (feeder.machines ?? []).filter((_machine, index) => index % 25 === 24),
      inverters: Array.from({ length: 12 }, (_unit, index) => {
        const node = `n${(index + 1) * Math.floor(nodes / 13)}`;
        return { id: `i${index}`, node, phases: 'ABC', kva: 20, faultCurrentPu: 1.2 };
      }),
      sections: devices.map(({ id }, index) => sectionOf(id, 1 - index / (devices.length + 2))),
    },
  };
}

/** Times the room of every node, in the wall clock's seconds, which is what somebody waits for. */
export function measureRoom(nodes: number) {
  const study = makeLoadedNetwork(nodes);
  const began = performance.now();
  const { nodes: found, counted } = findRoom(study, proFormaRuleSet);
  const seconds = (performance.now() - began) / 1000;
  const binding = new Map<string, number>();
  for (const { inverters, machine } of found) {
    for (const { bindsAt } of [inverters, machine]) {
      const question = bindsAt?.question ?? 'none';
      binding.set(question, (binding.get(question) ?? 0) + 1);
    }
  }
  return {
    ...{ nodes, roomNodes: found.length, devices: study.feeder.devices?.length ?? 0 },
    seconds: Math.round(seconds * 100) / 100,
    msPerNode: Math.round((seconds * 1e5) / found.length) / 100,
    counted,
    binding: Object.fromEntries(binding),
  };
}
