import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import type { Working } from '../working.ts';
import type { Generator } from './island-generation.ts';
import { generatorsIn, sumKva } from './island-generation.ts';
import type { MinimumLoad } from './island-load.ts';
import { findMinimumLoad } from './island-load.ts';
import type { Island, IslandsOfCase } from './islands.ts';
import { listIslands } from './islands.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/* Generation against the least load of each island, at nameplate: controls of power are too slow for what happens there. */

/** What generates and what is consumed at one moment. */
export type Moment = {
  readonly generationKw: number;
  readonly loadKw: number;
  /** Part of both: generators whose output had been taken off the load, here at full output. */
  readonly netGenerationKw: number;
};

export type Balance = {
  readonly operating: OperatingCase;
  readonly island: Island;
  readonly generators: readonly Generator[];
  readonly load: MinimumLoad;
};

export type LackingBalance = Pick<Balance, 'operating' | 'island' | 'generators'> & { lacking: string };

/** Sets up the balance of every island in every operating case. */
export function listBalances(screening: Screening): { balances: Balance[]; lacking: LackingBalance[] } {
  const balances: Balance[] = [];
  const lacking: LackingBalance[] = [];
  const look = (ofCase: IslandsOfCase, island: Island) => {
    const { operating } = ofCase;
    const generators = generatorsIn(screening, operating, island);
    if (generators.length === 0) return;
    const load = findMinimumLoad(screening, ofCase, island);
    if ('lacking' in load) lacking.push({ operating, island, generators, lacking: load.lacking });
    else balances.push({ operating, island, generators, load });
  };
  for (const ofCase of listIslands(screening)) for (const island of ofCase.islands) look(ofCase, island);
  return { balances, lacking };
}

/**
 * Lists the moments between which the worst one lies. A minimum that is gross gives one. Of a net minimum N with P of
 * generation besides, the load was N + g while what it is net of made g: P/N at g = 0, (P + G)/(N + G) at its nameplate G.
 */
export function listMoments({ kw, netOf }: MinimumLoad, generators: readonly Generator[]): Moment[] {
  const counted = sumKva(generators.filter(({ id }) => !netOf.has(id)));
  const net = sumKva(generators) - counted;
  const still = { generationKw: counted, loadKw: kw, netGenerationKw: 0 };
  if (net === 0) return [still];
  return [still, { generationKw: counted + net, loadKw: kw + net, netGenerationKw: net }];
}

/** The moment of most generation for the load, without the project where `project` is false. */
export function findWorstMoment({ load, generators }: Balance, project = true): Moment {
  const counted = project ? generators : generators.filter(({ ofProject }) => !ofProject);
  return listMoments(load, counted).reduce((p, q) => (ratioOf(q) > ratioOf(p) ? q : p));
}

export function ratioOf({ generationKw, loadKw }: Moment): number {
  return generationKw / loadKw;
}

/** The largest of all, the first of equals so that the device nearest the source is named. */
export function findWorstBalance(balances: readonly Balance[]): Balance | undefined {
  const size = (balance: Balance) => ratioOf(findWorstMoment(balance));
  return balances.reduce<Balance | undefined>(
    (worst, each) => (worst && size(each) <= size(worst) * (1 + 1e-9) ? worst : each),
    undefined,
  );
}

/** Writes down generation and load of a moment and gives both. */
export function explainMoment(
  working: Working,
  { load, generators, island }: Balance,
  moment: Moment,
): { generation: Quantity; load: Quantity } {
  const beyond = `beyond ${island.device.id}, nameplate`;
  const net = moment.netGenerationKw;
  const part = (ofProject: boolean) =>
    sumKva(generators.filter((each) => each.ofProject === ofProject && !load.netOf.has(each.id)));
  const others = working.given('P_others', `Connected or ahead in the queue ${beyond}`, part(false), 'kW');
  const project = working.given('P_project', `Of the project ${beyond}`, part(true), 'kW');
  const minimum = working.given('L_min', load.words, load.kw, 'kW');
  const netOf =
    net > 0
      ? [working.given('P_net', 'What the load is net of, at the moment when it all runs', net, 'kW')]
      : [];
  const generation = working.compute(
    { symbol: 'P', words: 'All generation', unit: 'kW' },
    ['P_others', 'P_project', ...netOf.map(({ symbol }) => symbol)].join(' + '),
    [others, project, ...netOf],
    moment.generationKw,
  );
  if (net === 0) return { generation, load: minimum };
  const gross = working.compute(
    { symbol: 'L', words: 'Load at that moment', unit: 'kW' },
    'L_min + P_net',
    [minimum, ...netOf],
    moment.loadKw,
  );
  return { generation, load: gross };
}

export function describeMoment({ island, generators, load }: Balance, moment: Moment): string {
  const others = sumKva(generators.filter(({ ofProject }) => !ofProject));
  const project = sumKva(generators.filter(({ ofProject }) => ofProject));
  const net =
    load.netOf.size > 0 && moment.netGenerationKw === 0
      ? ' What it is net of is left out on both sides.'
      : '';
  return `Worst with ${island.device.id} open: ${kilowatts(others)} connected or ahead and ${kilowatts(project)} of the project, against ${kilowatts(moment.loadKw)} of load (${load.words.charAt(0).toLowerCase()}${load.words.slice(1)}).${net}`;
}

/**
 * Joins the finding of the worst island with one for each device beyond which the load is not known. Of a device that would
 * have both, what is outside stays, and else what is missing.
 */
export function joinLacking(
  screening: Screening,
  id: QuestionId,
  measured: Answered | undefined,
  lacking: readonly LackingBalance[],
): Answered[] {
  const notes = new Map(lacking.map(({ island, lacking: note }) => [island.device.id, note]));
  const element = measured?.element ?? '';
  if (measured?.verdict === 'outside') notes.delete(element);
  return [
    ...(measured && !notes.has(element) ? [measured] : []),
    ...[...notes].map(([device, note]) => answer(screening, id, 'needs-data', { element: device, note })),
  ];
}

export function kilowatts(size: number): string {
  return `${Number(size.toFixed(1))} kW`;
}
