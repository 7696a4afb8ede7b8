import type { ModelNode } from '../../db/repositories/model-nodes.ts';
import type { Feeder, Study } from '../../shared/schemas/study.ts';

/** What a model version's blob holds. */
type ModelContent = Pick<Study, 'frequencyHz' | 'baseMva' | 'prefaultFactor' | 'minimumFaultOhm' | 'feeder'>;

const z1 = { r: 0.19, x: 0.39 };
const z0 = { r: 0.48, x: 1.2 };
const kv = 12.47;

/** In open sea; a hundredth of a degree of latitude is 1.11 km. */
const places: Record<string, [lng: number, lat: number]> = {
  bus: [-31, 42],
  n1: [-31, 42.01],
  n2: [-31, 42.02],
  n3: [-31, 42.03],
  n4: [-31.01, 42.02],
  n5: [-31, 41.99],
};

/**
 * Six nodes, made up for tests: bus – n1 – n2 – n3 is three-phase, n4 hangs on phase B of n2 (all circuit FX-1), and
 * n5 is a circuit of its own (FX-2).
 */
function makeFixtureFeeder(): Feeder {
  return {
    nodes: Object.entries(places).map(([id, position]) => ({
      id,
      kv,
      phases: id === 'n4' ? 'B' : 'ABC',
      position,
    })),
    sources: [{ id: 'grid', node: 'bus', max: { z1: { r: 0.05, x: 1 }, z0: { r: 0.05, x: 0.9 } } }],
    lines: [
      { id: 'l1', from: 'bus', to: 'n1', phases: 'ABC', km: 1.11, z1, z0, circuit: 'FX-1' },
      { id: 'l2', from: 'n1', to: 'n2', phases: 'ABC', km: 1.11, z1, z0, circuit: 'FX-1' },
      { id: 'l3', from: 'n2', to: 'n3', phases: 'ABC', km: 1.11, z1, z0, circuit: 'FX-1' },
      { id: 'l4', from: 'n2', to: 'n4', phases: 'B', km: 0.83, z1, z0, circuit: 'FX-1' },
      { id: 'l5', from: 'bus', to: 'n5', phases: 'ABC', km: 1.11, z1, z0, circuit: 'FX-2' },
    ],
    loads: [{ id: 'load-n3', node: 'n3', phases: 'ABC', kw: 3000, kvar: 900 }],
    devices: [
      { id: 'cb1', branch: 'l1', end: 'from', kind: 'breaker', interruptingKa: 12, circuit: 'FX-1' },
      { id: 'cb2', branch: 'l5', end: 'from', kind: 'breaker', interruptingKa: 12, circuit: 'FX-2' },
    ],
    sections: [
      { id: 's1', device: 'cb1', peakKw: 9000 },
      { id: 's2', device: 'cb2', peakKw: 4000 },
    ],
    circuits: [
      { id: 'FX-1', lineType: 'four-wire' },
      { id: 'FX-2', lineType: 'three-wire' },
    ],
  };
}

export function makeFixtureModel(): ModelContent {
  return {
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1.05, min: 0.95 },
    minimumFaultOhm: 40,
    feeder: makeFixtureFeeder(),
  };
}

const circuitOf: Record<string, string | null> = { bus: null, n5: 'FX-2' };

export function listFixtureNodes(): ModelNode[] {
  return makeFixtureFeeder().nodes.map((node) => {
    const [lng, lat] = places[node.id] as [number, number];
    const circuit = circuitOf[node.id];
    return {
      nodeId: node.id,
      circuit: circuit === undefined ? 'FX-1' : circuit,
      kv: node.kv,
      phases: node.phases,
      distanceKm: null,
      lng,
      lat,
    };
  });
}
