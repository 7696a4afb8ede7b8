import type { Cable, Conductor, Construction, Study } from '../../shared/schemas/study.ts';
import { ElementList } from './element-list.ts';
import { conductorSizes, outsideDiameterM, positionOf, tapeSizes } from './line-units.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';

/* That constructions can be built and that the lines which name one find their phases in it. */

type Sizes = { conductors: Map<string, number>; cables: Map<string, number> };

/** Notes duplicate ids, references to nothing, phases that a construction lacks or has twice, and places in one another. */
export function checkConstructions(study: Study, problems: Problems): void {
  const { conductors = [], cables = [], constructions = [] } = study.feeder;
  const radii: Sizes = {
    conductors: collect(conductors, 'conductors', conductorRadius, problems),
    cables: collect(cables, 'cables', cableRadius, problems),
  };
  const phasesOf = collect(constructions, 'constructions', letters, problems);
  constructions.forEach((construction, index) => {
    checkPlaces(construction, `/feeder/constructions/${index}/places`, radii, problems);
  });
  const lines = new ElementList(study, 'lines');
  lines.elements.forEach(({ construction, phases }, index) => {
    if (construction === undefined) return;
    const there = phasesOf.get(construction);
    if (there !== undefined && hasPhases(there, phases)) return;
    const id = describeValue(construction);
    const found = there === undefined ? id : `${id} with ${there || 'no phases'}`;
    const expected =
      there === undefined ? 'the id of a construction of the feeder' : `a construction with phases ${phases}`;
    problems.push({ pointer: lines.pointer(index, 'construction'), got: found, expected });
  });
}

function hasPhases(there: string, phases: string): boolean {
  return [...phases].every((phase) => there.includes(phase));
}

function conductorRadius(conductor: Conductor): number {
  return conductorSizes(conductor).diameterM / 2;
}

/** Of a tape-shield cable the radius of its shield: how thick its jacket is nobody says. */
function cableRadius(cable: Cable): number {
  return (cable.kind === 'concentric' ? outsideDiameterM(cable) : tapeSizes(cable).shieldDiameterM) / 2;
}

function letters({ places }: Construction): string {
  return ['A', 'B', 'C'].filter((letter) => places.some(({ phase }) => phase === letter)).join('');
}

function collect<T extends { id: string }, V>(
  list: readonly T[],
  kind: string,
  valueOf: (element: T) => V,
  problems: Problems,
): Map<string, V> {
  const known = new Map<string, V>();
  const first = new Map<string, number>();
  list.forEach((element, index) => {
    const { id } = element;
    if (known.has(id)) {
      const expected = `an id of its own (/feeder/${kind}/${first.get(id)!} has this one)`;
      problems.push({ pointer: `/feeder/${kind}/${index}/id`, got: describeValue(id), expected });
      return;
    }
    known.set(id, valueOf(element));
    first.set(id, index);
  });
  return known;
}

function checkPlaces({ places }: Construction, pointer: string, sizes: Sizes, problems: Problems): void {
  const radii = places.map(({ conductor, cable }, index) => {
    const [key, id] =
      conductor === undefined ? (['cable', cable!] as const) : (['conductor', conductor] as const);
    const radius = sizes[`${key}s`].get(id);
    if (radius !== undefined) return radius;
    const expected = `the id of a ${key} of the feeder`;
    problems.push({ pointer: `${pointer}/${index}/${key}`, got: describeValue(id), expected });
    return 0;
  });
  const positions = places.map(positionOf);
  places.forEach((place, index) => {
    const twin = places.findIndex(({ phase }) => phase === place.phase);
    if (place.phase !== 'N' && twin < index) {
      const expected = `each phase once (${pointer}/${twin} is this one)`;
      problems.push({ pointer: `${pointer}/${index}/phase`, got: describeValue(place.phase), expected });
    }
    for (let other = 0; other < index; other++) {
      const [here, there] = [positions[index]!, positions[other]!];
      const distanceM = Math.hypot(here.xM - there.xM, here.yM - there.yM);
      const nearestM = Math.max(radii[index]!, radii[other]!);
      // Conductors that touch are built, and roundly measured; a centre inside another conductor is not.
      if (distanceM > nearestM) continue;
      const from = `${pointer}/${other}`;
      const got = distanceM === 0 ? `the point of ${from}` : `${millimetres(distanceM)} from ${from}`;
      const expected = `a point of its own, more than ${millimetres(nearestM)} away (the larger radius)`;
      problems.push({ pointer: `${pointer}/${index}`, got, expected });
    }
  });
}

function millimetres(lengthM: number): string {
  return `${Number((lengthM * 1000).toPrecision(4))} mm`;
}
