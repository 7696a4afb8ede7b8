import type { Complex } from '../complex.ts';
import { at, magnitude, multiply } from '../complex.ts';
import type { FaultPoint } from '../faults.ts';
import { findInverterRaise } from '../findings/inverter-raise.ts';
import { isMember, isPresent } from '../case.ts';
import { sequencesOf } from '../open-circuit.ts';
import type { DrivingPoints } from '../sequence-networks.ts';
import type { SolvedCase } from '../solve-case.ts';
import { busOfNode, findFaultPoint, withoutInverters } from '../solve-case.ts';
import { transferColumn, transfersFrom } from '../transfers.ts';
import type { AddedPlant, Columns, Voltages } from './added-plant.ts';
import { transferWithPlant, withPlant } from './added-plant.ts';

/* Places at which faults are looked at while plants come and go elsewhere: each costs a few sweeps once. */

/** Of a case without the project: what all places share. */
export type RoomNetwork = {
  solved: SolvedCase;
  bare: SolvedCase;
  voltages: Voltages;
  bareVoltages: Voltages;
  inverters: readonly PlacedInverter[];
};

/** An inverter that is there already: its bus, the size of its current in each sequence, and the columns at its bus. */
type PlacedInverter = { bus: number; sizes: readonly Complex[]; columns: Columns };

export function makeRoomNetwork(solved: SolvedCase): RoomNetwork {
  const bare = withoutInverters(solved);
  return {
    solved,
    bare,
    voltages: voltagesOf(solved),
    bareVoltages: voltagesOf(bare),
    inverters: placeInverters(solved),
  };
}

function voltagesOf({ openCircuit: { v1, v2, v0 }, choice }: SolvedCase): Voltages {
  return { v1, v2, v0, prefault: choice.prefaultFactor };
}

function placeInverters(solved: SolvedCase): PlacedInverter[] {
  const { model, choice, networks, openCircuit } = solved;
  const known = new Map<number, Columns>();
  return model.inverters.flatMap((inverter) => {
    const bus = busOfNode(solved, inverter.node);
    if (!isMember(choice.inverters, inverter.ofProject) || !isPresent(choice, inverter) || bus === -1)
      return [];
    if (!known.has(bus)) {
      const z1 = transferColumn(networks.positive, bus);
      const isBalanced = openCircuit.balanced;
      const z2 = isBalanced ? z1 : transferColumn(networks.negative, bus);
      known.set(bus, { z1, z2, z0: isBalanced ? z1 : transferColumn(networks.zero, bus) });
    }
    const { i1, i2, i0 } = sequencesOf(inverter.currents);
    return [{ bus, sizes: openCircuit.balanced ? [i1] : [i1, i2, i0], columns: known.get(bus)! }];
  });
}

/** A place in one network. */
export type SeenPlace = {
  network: RoomNetwork;
  bus: number;
  columns: Columns;
  point: FaultPoint;
  barePoint: FaultPoint;
  /** What the sum over inverters does not tell of their raise: what they share of a lateral. */
  raiseBesides: number;
};

/** Looks at a node of a network; nothing where nothing feeds it. */
export function seePlace(network: RoomNetwork, node: number): SeenPlace | undefined {
  const point = findFaultPoint(network.solved, node);
  const barePoint = findFaultPoint(network.bare, node);
  if (!point || !barePoint) return undefined;
  const { z1, z2, z0 } = transfersFrom(network.solved, node);
  const bus = busOfNode(network.solved, node);
  const place = { network, bus, columns: { z1, z2, z0 }, point, barePoint, raiseBesides: 0 };
  const raise = findInverterRaise(network.solved, node) * network.voltages.prefault;
  return { ...place, raiseBesides: raise - sumRaise(place) };
}

const sequences = ['z1', 'z2', 'z0'] as const;
const networkNames = ['positive', 'negative', 'zero'] as const;

/** Σ|Zdm|·|Im| over the inverters that are there, with the plant where one is given. */
function sumRaise({ network, bus, columns }: Omit<SeenPlace, 'raiseBesides'>, plant?: AddedPlant): number {
  let raise = 0;
  for (const inverter of network.inverters) {
    inverter.sizes.forEach((size, index) => {
      const sequence = sequences[index]!;
      const zdm = at(inverter.columns[sequence], bus);
      const driving: DrivingPoints['positive'] = network.solved.networks[networkNames[index]!];
      const z = plant
        ? transferWithPlant(
            zdm,
            at(inverter.columns[sequence], plant.bus),
            columns[sequence],
            driving,
            plant,
            sequence,
          )
        : zdm;
      raise += magnitude(multiply(z, size));
    });
  }
  return raise;
}

/** What a fault at the place finds with a plant: as phasors, and without inverters but with their currents' raise in magnitude. */
export function seeWithPlant(
  place: SeenPlace,
  plant: AddedPlant,
): { point: FaultPoint; barePoint: FaultPoint; raise: number } {
  const { network, columns } = place;
  const { networks } = network.solved;
  const own = plant.kind === 'inverters' ? magnitude(multiply(at(columns.z1, plant.bus), plant.current)) : 0;
  return {
    point: withPlant(place.point, columns, networks, plant, network.voltages),
    barePoint:
      plant.kind === 'inverters'
        ? place.barePoint
        : withPlant(place.barePoint, columns, networks, plant, network.bareVoltages),
    raise: (sumRaise(place, plant) + place.raiseBesides + own) / network.voltages.prefault,
  };
}
