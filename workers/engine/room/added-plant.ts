import type { Complex, ComplexArray } from '../complex.ts';
import { add, at, divide, multiply, polar, scale, subtract, zero } from '../complex.ts';
import type { FaultPoint } from '../faults.ts';
import { phasesOf } from '../open-circuit.ts';
import type { DrivingPoints } from '../sequence-networks.ts';
import { drivingPoint } from '../sequence-networks.ts';
import { inverterFaultCurrentPu, machinePlantPu, type PlantKind } from './plants.ts';

/*
 * What a fault finds at a place d when a plant joins at a bus k, from the columns of Z at d alone. A machine is a shunt z/S:
 *   Z'dd = Zdd − Zdk²/(Zkk + z),  V'd = Vd − Zdk/(Zkk + z)·(Vk − E)
 * (W. W. Hager, "Updating the inverse of a matrix", SIAM Review 31 (1989), for one shunt), inverters are a current: V'd = Vd + Zdk·I.
 */

/** A plant of one kind and size at a bus, per unit on the study's base. */
export type AddedPlant =
  | { kind: 'inverters'; bus: number; current: Complex }
  | { kind: 'machine'; bus: number; z1: Complex; z2: Complex; z0: Complex };

const currentPu = polar(inverterFaultCurrentPu, -90);

export function addPlant(kind: PlantKind, bus: number, kva: number, baseMva: number): AddedPlant {
  const share = kva / (baseMva * 1000);
  if (kind === 'inverters') return { kind, bus, current: scale(currentPu, share) };
  const { z1, z2, z0 } = machinePlantPu;
  return { kind, bus, z1: scale(z1, 1 / share), z2: scale(z2, 1 / share), z0: scale(z0, 1 / share) };
}

/** Columns of the three impedance matrices at a place's bus. */
export type Columns = { z1: ComplexArray; z2: ComplexArray; z0: ComplexArray };

/** Voltages before the fault at every bus, of which a new machine takes its share. */
export type Voltages = { v1: ComplexArray; v2: ComplexArray; v0: ComplexArray; prefault: number };

/** How a network without voltages turns impedances: as resistances alone, as reactances alone, or not at all. */
type Turn = (z: Complex) => Complex;
const asItIs: Turn = (z) => z;
export const resistanceOf: Turn = ({ re }) => ({ re, im: 0 });
export const reactanceOf: Turn = ({ im }) => ({ re: 0, im });

/** Gives the place with the plant there too. `networks` has the driving points, `voltages` what stands before the fault. */
export function withPlant(
  before: FaultPoint,
  columns: Columns,
  networks: DrivingPoints,
  plant: AddedPlant,
  voltages: Voltages | undefined,
  turn: Turn = asItIs,
): FaultPoint {
  if (plant.kind === 'inverters') {
    if (!voltages) return before;
    const raised = phasesOf(multiply(at(columns.z1, plant.bus), plant.current), zero, zero);
    return { ...before, voltage: addPhases(before.voltage, raised, 1) };
  }
  const { bus } = plant;
  const share1 = shareOf(columns.z1, networks.positive, bus, turn(plant.z1));
  const share2 = shareOf(columns.z2, networks.negative, bus, turn(plant.z2));
  const share0 = shareOf(columns.z0, networks.zero, bus, turn(plant.z0));
  const impedances = {
    z1: subtract(before.z1, multiply(share1, at(columns.z1, bus))),
    z2: subtract(before.z2, multiply(share2, at(columns.z2, bus))),
    z0: before.z0 && subtract(before.z0, multiply(share0, at(columns.z0, bus))),
  };
  if (!voltages) return { ...before, ...impedances };
  const v1 = subtract(at(voltages.v1, bus), { re: voltages.prefault, im: 0 });
  const fallen = phasesOf(
    multiply(share1, v1),
    multiply(share2, at(voltages.v2, bus)),
    multiply(share0, at(voltages.v0, bus)),
  );
  return { ...before, ...impedances, voltage: addPhases(before.voltage, fallen, -1) };
}

/** Zdk/(Zkk + z); nothing where the bus has no path in this sequence. */
function shareOf(column: ComplexArray, network: DrivingPoints['positive'], bus: number, z: Complex): Complex {
  if (!network.hasPath[bus]) return zero;
  return divide(at(column, bus), add(drivingPoint(network, bus), z));
}

function addPhases(
  [a, b, c]: FaultPoint['voltage'],
  more: FaultPoint['voltage'],
  sign: 1 | -1,
): FaultPoint['voltage'] {
  return [add(a, scale(more[0], sign)), add(b, scale(more[1], sign)), add(c, scale(more[2], sign))];
}

/** Z'dm between a place and another bus m with the plant there: Zdm − Zdk·Zkm/(Zkk + z). */
export function transferWithPlant(
  zdm: Complex,
  zkm: Complex,
  column: ComplexArray,
  network: DrivingPoints['positive'],
  plant: AddedPlant,
  sequence: 'z1' | 'z2' | 'z0',
): Complex {
  if (plant.kind === 'inverters') return zdm;
  return subtract(zdm, multiply(shareOf(column, network, plant.bus, plant[sequence]), zkm));
}
