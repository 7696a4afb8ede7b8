import type {
  BareConductor,
  Cable,
  Conductor,
  Construction,
  Phases,
  Place,
} from '../../shared/schemas/study.ts';
import { bundleStrands, rollTape } from './cable-neutrals.ts';
import type { Wire } from './line-constants.ts';
import { conductorSizes, positionOf } from './line-units.ts';

/** What a place can hold. */
export type WireLibrary = {
  readonly conductors: ReadonlyMap<string, Conductor>;
  readonly cables: ReadonlyMap<string, Cable>;
};

/**
 * Lists a construction's wires for a line with these phases: first the phases, in the line's order, then all that is
 * earthed. A phase that the line does not have carries no current and is left out, but for the strands or tape of its cable.
 */
export function listWires({ places }: Construction, phases: Phases, library: WireLibrary): Wire[] {
  const ofPhases: Wire[] = [];
  const earthed: Wire[] = [];
  places.forEach((place, index) => {
    const { core, around } = wiresAt(place, index, library);
    const order = phases.indexOf(place.phase);
    if (place.phase === 'N') earthed.push(core);
    else if (order !== -1) ofPhases[order] = core;
    if (around) earthed.push(around);
  });
  return [...ofPhases, ...earthed];
}

function wiresAt(place: Place, index: number, library: WireLibrary): { core: Wire; around: Wire | null } {
  const { xM, yM } = positionOf(place);
  const spot = { place: index, xM, yM };
  const bare = (given: BareConductor): Wire => {
    const { ohmPerKm, gmrM } = conductorSizes(given);
    return { ohmPerKm, gmrM, ringRadiusM: 0, ...spot };
  };
  if (place.conductor !== undefined) {
    return { core: bare(library.conductors.get(place.conductor)!), around: null };
  }
  const cable = library.cables.get(place.cable!)!;
  const around = cable.kind === 'concentric' ? bundleStrands(cable) : rollTape(cable);
  return { core: bare(cable.core), around: { ...around, ...spot } };
}
