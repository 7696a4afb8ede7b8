import type { FaultPoint } from '../faults.ts';
import { largestPhase, listBoltedFaults } from '../faults.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import type { SolvedCase } from '../solve-case.ts';
import { findFaultPoint } from '../solve-case.ts';
import type { AddedPlant } from './added-plant.ts';
import type { RoomNetwork, SeenPlace } from './seen-places.ts';
import { seePlace, seeWithPlant } from './seen-places.ts';

/* What all generation adds to the fault current at a node with a plant there, as findings/contribution.ts measures it. */

type Currents = { threePhase: number; lineGround: number };

/** A node in one operating case, with what the sources alone give there. */
type ContributionPlace = { place: SeenPlace; none: Currents };

export function placeContribution(
  cases: readonly OperatingCase[],
  node: number,
  kv: number,
  networkOf: (solved: SolvedCase) => RoomNetwork,
): ContributionPlace[] {
  return cases.flatMap(({ solver }): ContributionPlace[] => {
    const place = seePlace(networkOf(solver.solve('before', kv)), node);
    const alone = findFaultPoint(solver.solve('none', kv), node);
    if (!place || !alone) return [];
    return [{ place, none: currentsOf(alone) }];
  });
}

/** The worst of all operating cases, in percent. */
export function findContribution(places: readonly ContributionPlace[], plant: AddedPlant): number {
  let worst = -Infinity;
  for (const { place, none } of places) {
    const base = Math.max(none.threePhase, none.lineGround);
    if (base === 0) continue;
    const { point, barePoint, raise } = seeWithPlant(place, plant);
    const phasors = currentsOf(point);
    const magnitudes = currentsOf(barePoint);
    const increase = (kind: keyof Currents) =>
      Math.max(phasors[kind], magnitudes[kind] * (1 + raise)) - none[kind];
    worst = Math.max(worst, Math.max(increase('threePhase'), increase('lineGround')) / base);
  }
  return worst * 100;
}

function currentsOf(point: FaultPoint): Currents {
  const currents = { threePhase: 0, lineGround: 0 };
  for (const fault of listBoltedFaults(point)) {
    if (fault.kind !== 'threePhase' && fault.kind !== 'lineGround') continue;
    currents[fault.kind] = Math.max(currents[fault.kind], largestPhase(fault));
  }
  return currents;
}
