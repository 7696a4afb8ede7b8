import type { Device } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import { isInService } from '../case.ts';
import type { FaultPoint } from '../faults.ts';
import { largestPhase, listBoltedFaults } from '../faults.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import { baseAmps } from '../per-unit.ts';
import { ratingFactor } from '../rating-basis.ts';
import type { SolvedCase } from '../solve-case.ts';
import { findFaultPoint, solveCase } from '../solve-case.ts';
import { transfersFrom } from '../transfers.ts';
import { compareSeparately, type SeparateModels } from '../x-over-r.ts';
import type { AddedPlant, Columns } from './added-plant.ts';
import { reactanceOf, resistanceOf, withPlant } from './added-plant.ts';
import type { RoomNetwork, SeenPlace } from './seen-places.ts';
import { seePlace, seeWithPlant } from './seen-places.ts';

/* Duty of a device with a plant anywhere, as findings/interrupting-duty.ts measures it. */

type Rated = Device & { interruptingKa: number };

/** A device in one operating case. */
type DutyPlace = {
  place: SeenPlace;
  phases: number;
  kv: number;
  resistances: SeparatePlace;
  reactances: SeparatePlace;
};

type SeparatePlace = { solved: SolvedCase; columns: Columns; point: FaultPoint | undefined };

type RatedDevice = { device: Rated; places: readonly DutyPlace[] };

/** Makes ready every device with a rating: in each operating case in which its branch is in service. */
export function placeDevices(
  model: Model,
  devices: readonly Device[],
  cases: readonly OperatingCase[],
  separate: SeparateModels,
  networkOf: (solved: SolvedCase) => RoomNetwork,
): RatedDevice[] {
  const solvedApart = new Map<SolvedCase, { resistances: SolvedCase; reactances: SolvedCase }>();
  const apart = (solved: SolvedCase) => {
    let found = solvedApart.get(solved);
    if (!found) {
      found = {
        resistances: solveCase(separate.resistances, solved.choice),
        reactances: solveCase(separate.reactances, solved.choice),
      };
      solvedApart.set(solved, found);
    }
    return found;
  };
  const rated = devices.filter((device): device is Rated => device.interruptingKa !== undefined);
  return rated.map((device) => {
    const branch = model.branches[model.branchIndex.get(device.branch)!]!;
    const node = branch[device.end];
    const { kv } = model.nodes[node]!;
    const places = cases.flatMap(({ solver, name }): DutyPlace[] => {
      const { solved } = solver.solveDuty('before', kv);
      if (name !== undefined && !isInService(model, solved.choice, branch)) return [];
      const place = seePlace(networkOf(solved), node);
      if (!place) return [];
      const { resistances, reactances } = apart(solved);
      const seen = (each: SolvedCase): SeparatePlace => ({
        solved: each,
        columns: transfersFrom(each, node),
        point: findFaultPoint(each, node),
      });
      return [
        { place, phases: branch.phases, kv, resistances: seen(resistances), reactances: seen(reactances) },
      ];
    });
    return { device, places };
  });
}

/** The largest loading of a device in percent of its rating, over all operating cases. */
export function findLoading(
  { device, places }: RatedDevice,
  plant: AddedPlant,
  baseMva: number,
  frequencyHz: number,
): number {
  let worst = 0;
  for (const at of places) {
    const { point, barePoint, raise } = seeWithPlant(at.place, plant);
    const apart = (place: SeparatePlace, turn: typeof resistanceOf) =>
      place.point && withPlant(place.point, place.columns, place.solved.networks, plant, undefined, turn);
    const xrOf = compareSeparately(apart(at.resistances, resistanceOf), apart(at.reactances, reactanceOf));
    const service = { kv: at.kv, frequencyHz };
    const amps = baseAmps(baseMva, at.kv);
    const counted = (seen: FaultPoint, times: number) =>
      Math.max(
        0,
        ...listBoltedFaults(seen, at.phases).map(
          (fault) => largestPhase(fault) * amps * times * ratingFactor(device, service, xrOf(fault.kind)),
        ),
      );
    worst = Math.max(worst, counted(point, 1), counted(barePoint, 1 + raise));
  }
  return (worst / (device.interruptingKa * 1000)) * 100;
}
