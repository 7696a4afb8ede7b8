import { demoPlaces } from '../../db/seeds/demo/feeders.ts';
import { typePin, type ProjectStory } from './handing-in.ts';

const contactEmail = 'ines@greenmarch.example';

/** A megawatt of solar where it is no trouble, grounded through a reactor that leaves the feeder's own ground relays their current; its pin is typed. */
export function makeSolarStory(name: string): ProjectStory {
  return {
    name,
    contactEmail,
    putPin: (page) => typePin(page, demoPlaces.solarSite),
    model: 'Quern Electric Q-1000 Field',
    transformer: 'Ivory & Brand Field 1250/25',
    windings: 'YNd1',
    utilityReactorOhm: 40,
  };
}

/** Two megavolt-amperes of machine behind a delta, where several limits are passed. */
export function makeMachineStory(name: string): ProjectStory {
  return {
    name,
    contactEmail,
    putPin: (page) => typePin(page, demoPlaces.machineSite),
    model: 'Bellweir Machines BW 2000',
    transformer: 'Tarrant Coil P-2500/12',
    windings: 'Dyn1',
    machineNeutral: 'Not grounded',
  };
}
