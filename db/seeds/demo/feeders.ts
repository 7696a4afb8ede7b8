import type { Feeder, Switch } from '../../../shared/schemas/study.ts';
import { countryCircuits } from './circuits.ts';
import { makeBiogasPlant, makeInverters } from './generation.ts';
import { at, toLngLat, type Point } from './plane.ts';
import { describeSubstation, makeCapacitors, makeRegulators, makeServiceTransformers } from './apparatus.ts';
import { makeRoads } from './roads.ts';
import { makeDevices, makeLines, makeLoads, makeSections } from './spans.ts';
import { stringCircuit, type StrungCircuit } from './stringing.ts';
import { substationPlans, type SubstationPlan } from './substations.ts';
import { planTownCircuit } from './town-circuit.ts';
import { makeWater } from './water.ts';

export interface DemoModel {
  code: string;
  name: string;
  substation: string;
  place: [lng: number, lat: number];
  content: {
    frequencyHz: number;
    baseMva: number;
    prefaultFactor: { max: number; min: number };
    minimumFaultOhm: number;
    feeder: Feeder;
  };
}

function placed(point: Point): { lat: number; lng: number } {
  const [lng, lat] = toLngLat(point);
  return { lat, lng };
}

/** Two places for a first try: one where a megawatt of solar is no trouble, one where two of machines are. */
export const demoPlaces = {
  solarSite: placed([-7.2, 3.08]),
  machineSite: placed([9.85, 4.1]),
} as const;

/** Where two circuits meet and can be joined: which of them, at which junction, and whether they are now. */
const ties: readonly {
  id: string;
  junction: string;
  circuits: readonly [string, string];
  closed: boolean;
}[] = [
  { id: 'PL-TIE1', junction: 'Gannet Cross', circuits: ['PL1', 'PL2'], closed: true },
  { id: 'PL-TIE2', junction: 'Thorn Hay', circuits: ['PL1', 'PL2'], closed: false },
  { id: 'HC-TIE1', junction: 'Pennick Bridge', circuits: ['HC1', 'HC2'], closed: false },
];

function makeTies(circuits: readonly StrungCircuit[]): Switch[] {
  const poleAt = (code: string, junction: string) => {
    const circuit = circuits.find((candidate) => candidate.plan.code === code);
    const index = circuit?.atJunction.get(junction);
    return circuit === undefined || index === undefined ? undefined : at(circuit.poles, index).id;
  };
  return ties.flatMap(({ id, junction, circuits: [first, second], closed }) => {
    const [from, to] = [poleAt(first, junction), poleAt(second, junction)];
    return from === undefined || to === undefined ? [] : [{ id, from, to, closed, circuit: first }];
  });
}

function makeFeeder(substation: SubstationPlan, circuits: readonly StrungCircuit[]): Feeder {
  const { code, kv, highKv, place } = substation;
  const [grid, bus] = [`${code}-GRID`, `${code}-BUS`];
  const plants = circuits.filter(({ plan }) => plan.code === 'HC2').map(makeBiogasPlant);
  const lines = circuits.flatMap((circuit) => makeLines(circuit, bus));
  const built = circuits.map((circuit) => {
    const [devices, loads] = [makeDevices(circuit, substation), makeLoads(circuit)];
    const inverters = makeInverters(circuit);
    const services = makeServiceTransformers(circuit, loads, inverters);
    return { devices, loads, inverters, services, sections: makeSections(circuit, devices, loads) };
  });
  return {
    circuits: circuits.map(({ plan }) => ({
      id: plan.code,
      lineType: 'four-wire',
      subjectToRules: true,
    })),
    nodes: [
      { id: grid, kv: highKv, phases: 'ABC', position: toLngLat([place[0], place[1] + 0.03], 6) },
      { id: bus, kv, phases: 'ABC', position: toLngLat(place, 6) },
      ...circuits.flatMap(({ poles }) =>
        poles.map(({ id, phases, point }) => ({ id, kv, phases, position: toLngLat(point, 6) })),
      ),
      ...plants.flatMap((plant) => plant.nodes),
    ],
    sources: [{ id: `${code}-SOURCE`, node: grid, ...substation.source }],
    lines,
    transformers: [
      { id: `${code}-T1`, from: grid, to: bus, ...substation.bank, connection: 'Dyn1', neutralTo: 'solid' },
      ...plants.flatMap((plant) => plant.transformers),
    ],
    switches: makeTies(circuits),
    groundingBanks: [],
    machines: plants.flatMap((plant) => plant.machines),
    inverters: built.flatMap((part) => part.inverters),
    loads: built.flatMap((part) => part.loads),
    devices: built.flatMap((part) => part.devices),
    sections: built.flatMap((part) => part.sections),
    capacitors: circuits.flatMap(makeCapacitors),
    regulators: circuits.flatMap(makeRegulators),
    serviceTransformers: built.flatMap((part) => part.services),
    substations: [
      describeSubstation(
        substation,
        built.flatMap((part) => part.loads),
      ),
    ],
  };
}

/** The five circuits as they were strung; a lane belongs to the circuit that reaches it first. */
export function makeDemoCircuits(): StrungCircuit[] {
  const water = makeWater();
  const roads = makeRoads(water);
  const taken = new Set<string>();
  return [planTownCircuit(water), ...countryCircuits].map((plan) => stringCircuit(plan, roads, taken));
}

/** The three network models of Marrowbank Light & Power, the same bytes every time. */
export function makeDemoModels(): DemoModel[] {
  const circuits = makeDemoCircuits();
  return substationPlans.map((substation) => ({
    code: substation.code,
    name: substation.name,
    substation: substation.substation,
    place: toLngLat(substation.place),
    content: {
      frequencyHz: 60,
      baseMva: 10,
      prefaultFactor: { max: 1.05, min: 0.95 },
      minimumFaultOhm: substation.minimumFaultOhm,
      feeder: makeFeeder(
        substation,
        circuits.filter(({ plan }) => plan.code.startsWith(substation.code)),
      ),
    },
  }));
}
