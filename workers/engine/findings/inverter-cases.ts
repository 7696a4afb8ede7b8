import type { Inverter } from '../../../shared/schemas/study.ts';
import type { Shunt } from '../case.ts';
import { nodeAt } from '../model-parts.ts';
import { baseOhms, perUnit } from '../per-unit.ts';
import type { Moment } from './island-balance.ts';
import { listMoments } from './island-balance.ts';
import type { Generator } from './island-generation.ts';
import { generatorsIn, holdsVoltage, listGenerators } from './island-generation.ts';
import type { MinimumLoad } from './island-load.ts';
import { findMinimumLoad, listLoads } from './island-load.ts';
import type { IslandChoice, IslandNetwork, SeenImpedances } from './island-network.ts';
import { cutOutIslands, seeFromPoi } from './island-network.ts';
import type { InverterIsland, InverterVoltages } from './inverter-island.ts';
import { findInverterVoltages, withoutHolder } from './inverter-island.ts';
import type { Island, IslandsOfCase } from './islands.ts';
import { ruleOf } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Combination } from './other-ground-sources.ts';
import { listCombinations } from './other-ground-sources.ts';
import type { Screening } from './screening.ts';

/* The cases of the question what inverters do in a ground fault: island by island, with each ground source in and out. */

/** One island with one choice of what is in it. */
export type InverterCase = {
  readonly operating: OperatingCase;
  readonly island: Island;
  readonly words: string;
  readonly load: MinimumLoad;
  readonly generators: readonly Generator[];
  readonly moment: Moment;
  readonly given: InverterIsland;
  readonly voltages: InverterVoltages;
  /** The one bank that is out here and in otherwise; such a case decides unless the bank is the project's own. */
  readonly bankOut: string | undefined;
  readonly machines: 'all' | 'project';
  readonly decides: boolean;
  /** Whether every ground source is in. */
  readonly allIn: boolean;
};

export type LackingCase = { island: Island; lacking: string };

/** Banks of which each is looked at by itself; further ones are in or out together. */
const mostBanks = 8;

type Config = Omit<Combination, 'banks'> & {
  banks: IslandChoice['banks'];
  bankOut?: string;
  decides: boolean;
  allIn: boolean;
};

/** Works out every case of one operating case; `project` false leaves the project out. */
export function listInverterCases(
  screening: Screening,
  ofCase: IslandsOfCase,
  project: boolean,
): { cases: InverterCase[]; lacking: LackingCase[] } {
  const network = cutOutIslands(screening, ofCase, listGridForming(screening));
  if (!network) return { cases: [], lacking: [] };
  const { operating } = ofCase;
  // On a one-phase section there is no healthy phase; with two the method, which is one of sequences, has no answer.
  const isTwoPhase = countPhases(nodeAt(screening.model, screening.poi).phases) === 2;
  // Without the project only what decides is asked for.
  const configs = listConfigs(screening, network).filter(
    ({ machines, decides }) => project || (machines === 'all' && decides),
  );
  const seenIn = configs.map(({ machines, banks, out }) =>
    seeFromPoi(network, { machines, banks, out, project, companions: machines === 'all', holder: true }),
  );
  const cases: InverterCase[] = [];
  const lacking: LackingCase[] = [];
  ofCase.islands.forEach((island, place) => {
    const inIsland = generatorsIn(screening, operating, island).filter(
      ({ ofProject }) => project || !ofProject,
    );
    const generators = inIsland.filter(({ unit }) => unit.kind === 'inverter');
    if (generators.length === 0) return;
    const known = findKnown(screening, ofCase, island, generators);
    if ('lacking' in known) return void lacking.push({ island, lacking: known.lacking });
    configs.forEach((config, which) => {
      const seen = seenIn[which]![place];
      if (!seen) return void (isTwoPhase && lacking.push({ island, lacking: twoPhases(island) }));
      const { bankOut, machines, decides, allIn, words } = config;
      for (const moment of listMoments(known.load, generators.filter(isCurrentSource))) {
        const isHeld = inIsland.some((each) => holdsVoltage(each) && (machines === 'all' || each.ofProject));
        const given = describeIsland(screening, known.groundedShare, moment, seen, isHeld);
        const voltages = findInverterVoltages(given);
        const shared = {
          operating,
          island,
          load: known.load,
          generators,
          words,
          bankOut,
          machines,
          decides,
          allIn,
        };
        cases.push({ ...shared, moment, given, voltages });
      }
    });
  });
  return { cases, lacking };
}

/** Whether an inverter is a limited current source, and does not hold voltage by itself. */
export function isCurrentSource({ unit }: Generator): boolean {
  return unit.kind === 'inverter' && unit.inverter.gridForming === undefined;
}

function twoPhases({ device }: Island): string {
  return `Beyond ${device.id} there are two phases, for which there is no method here.`;
}

function countPhases(phases: number): number {
  return (phases & 1) + ((phases >> 1) & 1) + ((phases >> 2) & 1);
}

function listConfigs(screening: Screening, network: IslandNetwork): Config[] {
  const inverters = listGenerators(screening).filter(({ unit }) => unit.kind === 'inverter');
  const tied = inverters.flatMap(({ node }) => {
    const { id } = nodeAt(screening.model, node);
    return network.model.nodeIndex.get(id) ?? [];
  });
  const { groundingBanks } = network.model;
  const own = groundingBanks.filter(({ ofProject }) => ofProject);
  const others = groundingBanks.filter(({ ofProject }) => !ofProject);
  const outAlone = (list: typeof own, rest: 'feeder' | 'project') =>
    list.slice(0, mostBanks).map(({ id, ofProject }) => ({
      words: `bank ${id} out`,
      // Told by whose it is, all cases share one look at what is joined to what.
      ...(list.length === 1 ? { banks: rest } : { out: new Set([id]) }),
      bankOut: id,
      decides: !ofProject,
    }));
  const each = [...outAlone(own, 'feeder'), ...outAlone(others, 'project')];
  return listCombinations(network, tied).flatMap((combination): Config[] => {
    const isWhole = combination.banks === 'all';
    const whole = { ...combination, decides: true, allIn: isWhole };
    return isWhole ? [whole, ...each.map((bank) => ({ ...whole, ...bank, allIn: false }))] : [whole];
  });
}

/** Units that form a grid, as what stands behind their impedances; of what is not known no case is worked out. */
function listGridForming({ study, project, model }: Screening): Shunt[] {
  const shunt = ({ id, node, gridForming }: Inverter, ofProject: boolean): Shunt[] => {
    if (gridForming === undefined || gridForming === 'unknown') return [];
    const index = model.nodeIndex.get(node)!;
    const ohms = baseOhms(model.baseMva, nodeAt(model, index).kv);
    const { z1, z2 = z1, z0 } = gridForming;
    const pu = { z1: perUnit(z1, ohms), z2: perUnit(z2, ohms), z0: z0 ? perUnit(z0, ohms) : null };
    return [{ id, ofProject, companion: false, node: index, ...pu }];
  };
  return [
    ...(study.feeder.inverters ?? []).flatMap((inverter) => shunt(inverter, false)),
    ...(project.inverters ?? []).flatMap((inverter) => shunt(inverter, true)),
  ];
}

function findKnown(
  screening: Screening,
  ofCase: IslandsOfCase,
  island: Island,
  generators: readonly Generator[],
): { load: MinimumLoad; groundedShare: number } | { lacking: string } {
  const unknown = generators.find(
    ({ unit }) => unit.kind === 'inverter' && unit.inverter.gridForming === 'unknown',
  );
  if (unknown) return { lacking: `The impedances behind which ${unknown.id} holds voltage are not known.` };
  const load = findMinimumLoad(screening, ofCase, island);
  if ('lacking' in load) return load;
  const groundedShare = load.section?.groundedLoadShare ?? findGroundedShare(screening, ofCase, island);
  if (groundedShare === undefined) {
    return { lacking: `What share of the load beyond ${island.device.id} is grounded is not known.` };
  }
  return { load, groundedShare };
}

/** By the connection of each load, at its minimum where that is known; nothing unless all of them tell. */
function findGroundedShare(
  screening: Screening,
  { operating }: IslandsOfCase,
  island: Island,
): number | undefined {
  const loads = listLoads(screening, operating, island);
  let total = 0;
  let grounded = 0;
  for (const { connection, kw, minimumKw = kw } of loads) {
    if (connection === undefined) return undefined;
    total += minimumKw;
    if (connection === 'wye') grounded += minimumKw;
  }
  return total > 0 ? grounded / total : undefined;
}

function describeIsland(
  screening: Screening,
  groundedShare: number,
  moment: Moment,
  seen: SeenImpedances,
  isHeld: boolean,
): InverterIsland {
  const baseKw = screening.model.baseMva * 1000;
  const e = ruleOf(screening, 'inverter-grounding').prefaultFactor ?? 1;
  const z1 = isHeld ? withoutHolder(seen.z1) : undefined;
  const z2 = isHeld ? withoutHolder(seen.z2) : undefined;
  return {
    current: moment.generationKw / baseKw,
    load: moment.loadKw / baseKw,
    groundedShare,
    holding: z1 && z2 && { z1, z2, e },
    groundSources: seen.z0,
  };
}
