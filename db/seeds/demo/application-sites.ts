import { crossings, isCrossing } from './crossings.ts';
import { distanceKm, toLngLat, type Point } from './plane.ts';
import type { Dice } from './random.ts';
import type { Scenario } from './scenario.ts';
import type { Pole, StrungCircuit } from './stringing.ts';
import { substationPlans } from './substations.ts';

export interface Site {
  modelCode: string;
  node: string;
  lat: number;
  lng: number;
}

/** The junction itself, or the middle of the circuit's poles along the road of that name. */
function findHeart(near: string, poles: readonly Pole[]): Point | undefined {
  if (isCrossing(near)) return crossings[near];
  const along = poles.filter((pole) => pole.street === near);
  return along[Math.floor(along.length / 2)]?.point;
}

/** The nearest pole with the phases asked for that no other project has taken; the site lies some steps from it. */
export function chooseSite(
  scenario: Scenario,
  phases: 'ABC' | 'one',
  circuits: readonly StrungCircuit[],
  used: Set<string>,
  dice: Dice,
): Site {
  const poles = circuits.find(({ plan }) => plan.code === scenario.circuit)?.poles ?? [];
  const heart = findHeart(scenario.near, poles);
  const model = substationPlans.find(({ code }) => scenario.circuit.startsWith(code));
  if (!model || !heart) {
    throw new Error(
      `${scenario.name}: got ${scenario.near} on ${scenario.circuit}, expected a place on that circuit`,
    );
  }
  const pole = poles
    .filter((pole) => pole.parent !== null && !used.has(pole.id))
    .filter((pole) => (phases === 'ABC' ? pole.phases === 'ABC' : pole.phases.length === 1))
    .sort((a, b) => distanceKm(a.point, heart) - distanceKm(b.point, heart))[0];
  if (!pole) throw new Error(`${scenario.name}: got no free pole near ${scenario.near}, expected one`);
  used.add(pole.id);
  const [lng, lat] = toLngLat([
    pole.point[0] + dice.between(-0.03, 0.03),
    pole.point[1] - dice.between(0.015, 0.04),
  ]);
  return { modelCode: model.code, node: pole.id, lat, lng };
}
