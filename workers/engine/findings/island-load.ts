import type { Load } from '../../../shared/schemas/study.ts';
import type { Section } from '../../../shared/schemas/study-utility.ts';
import { wiringOf } from '../wiring.ts';
import type { Generator } from './island-generation.ts';
import { generatorsIn } from './island-generation.ts';
import type { Island, IslandsOfCase } from './islands.ts';
import { listIslands } from './islands.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/* The least load of an island, which is what its generators are left with. */

export type MinimumLoad = {
  readonly kw: number;
  /** Ids of generators whose output has been taken off it already. */
  readonly netOf: ReadonlySet<string>;
  /** The section that it is known of; nothing where single loads were added up. */
  readonly section: Section | undefined;
  readonly words: string;
};

export type Lacking = { readonly lacking: string };

/**
 * Finds the least load beyond an opened device: of its line section; in a scenario that leaves other load there, of the
 * largest section that lies wholly in it; else the sum of its loads where each one's is known.
 */
export function findMinimumLoad(
  screening: Screening,
  { operating }: IslandsOfCase,
  island: Island,
): MinimumLoad | Lacking {
  const device = island.device.id;
  const section = findSection(screening, island);
  if (section?.minimumKw !== undefined) {
    return readSection(section, section.minimumKw, generatorsIn(screening, operating, island));
  }
  const loads = listLoads(screening, operating, island);
  const known = loads.filter(({ minimumKw }) => minimumKw !== undefined);
  if (loads.length === 0 || known.length < loads.length) {
    return { lacking: `The minimum load beyond ${device} is not known.` };
  }
  const kw = known.reduce((total, { minimumKw }) => total + minimumKw!, 0);
  if (kw <= 0) return { lacking: `The loads beyond ${device} have no minimum above zero.` };
  const words = `Sum of the minimum of all ${loads.length} loads beyond ${device}`;
  return { kw, netOf: new Set(), section: undefined, words };
}

function readSection(
  section: Section,
  minimumKw: number,
  generators: readonly Generator[],
): MinimumLoad | Lacking {
  const { id, minimumIs, netOf = [] } = section;
  if (minimumIs === undefined && generators.some(({ ofProject }) => !ofProject)) {
    return { lacking: `Whether the minimum load of section ${id} has generation taken off is not known.` };
  }
  if (minimumIs === 'net' && netOf.length === 0) {
    return { lacking: `Of which generators the minimum load of section ${id} is net is not known.` };
  }
  if (minimumKw <= 0) return { lacking: `The minimum load of section ${id} is not above zero.` };
  const isNet = minimumIs === 'net';
  const words = `Minimum load of section ${id}${isNet ? `, net of ${netOf.join(', ')}` : ''}`;
  return { kw: minimumKw, netOf: new Set(isNet ? netOf : []), section, words };
}

/** The section of the device, or of the outermost device whose island in the model as it stands lies wholly in this one. */
function findSection(screening: Screening, island: Island): Section | undefined {
  const { study, model } = screening;
  const sectionOf = (device: string) => {
    const sections = (study.feeder.sections ?? []).filter((section) => section.device === device);
    return sections.find(({ minimumKw }) => minimumKw !== undefined) ?? sections[0];
  };
  const asItStands = listIslands(screening)[0]!.islands;
  if (asItStands.includes(island)) return sectionOf(island.device.id);
  const count = wiringOf(model).nodeFlags.length;
  const isInside = ({ holds }: Island, counts: (node: number) => boolean) => {
    for (let node = 0; node < count; node++) {
      if (holds(node) && counts(node) && !island.holds(node)) return false;
    }
    return true;
  };
  // Where the model lists its loads, a device's own section may lack what has none of them.
  const { loads = [] } = study.feeder;
  const bearsLoad = new Set(loads.map(({ node }) => model.nodeIndex.get(node)!));
  const own = asItStands.find(({ device }) => device === island.device);
  if (own && isInside(own, (node) => loads.length === 0 || bearsLoad.has(node))) {
    return sectionOf(own.device.id);
  }
  const inside = asItStands.filter((each) => isInside(each, () => true));
  const sections = inside.flatMap(({ device }) => sectionOf(device.id) ?? []);
  return sections.find(({ minimumKw }) => minimumKw !== undefined) ?? sections[0];
}

/** The utility's loads in an island; the project's own may be gone just when it generates. */
export function listLoads(
  { study, model }: Screening,
  { solver }: OperatingCase,
  { holds }: Island,
): readonly Load[] {
  const out = new Set(solver.scenario?.out);
  return (study.feeder.loads ?? []).filter(({ id, node }) => {
    return holds(model.nodeIndex.get(node)!) && !out.has(id);
  });
}
