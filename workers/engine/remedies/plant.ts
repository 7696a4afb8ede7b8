import type { Complex } from '../complex.ts';
import { scale } from '../complex.ts';
import { findContinuousNeutralAmps, findNeutralDuty } from '../ground-source.ts';
import { baseOhms } from '../per-unit.ts';
import { makeScreening, type ProjectStudy } from '../findings/make-screening.ts';
import { prepareModel } from '../prepare-model.ts';
import { drivingPoint } from '../sequence-networks.ts';
import { solveCase } from '../solve-case.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { RemedyFigure } from '../../../shared/schemas/remedies.ts';

/* The project by itself, seen from its point of interconnection, and what its neutral carries there. */

/** Impedances in ohms at the point of interconnection; null where a sequence has no path. */
export type Plant = { kv: number; z1: Complex | null; z0: Complex | null };

/** Looks into the project with nothing else there. */
export function findPlant(study: ProjectStudy): Plant {
  const { nodes, conductors, cables, constructions } = study.feeder;
  const bare = prepareModel({ ...study, feeder: { nodes, conductors, cables, constructions } });
  const poi = bare.nodeIndex.get(study.project.node)!;
  const { kv } = bare.nodes[poi]!;
  const { topology, networks } = solveCase(bare, {
    sources: 'out',
    prefaultFactor: 1,
    machines: 'all',
    inverters: 'none',
    groundingBanks: 'all',
    project: true,
    companions: true,
  });
  const ohms = baseOhms(study.baseMva, kv);
  const bus = topology.busOf[poi]!;
  const at = (network: typeof networks.positive): Complex | null => {
    if (bus === -1 || network.hasPath[bus] !== 1) return null;
    const { re, im } = drivingPoint(network, bus);
    return { re: re * ohms, im: im * ohms };
  };
  return { kv, z1: at(networks.positive), z0: at(networks.zero) };
}

/** Standing unbalance, of line to neutral, that a neutral is rated for: 1 to 3 % is usual (value from memory). */
const standingPercent = 3;

/** What the project's neutral carries for ten seconds and all the time, see ground-source.ts; `study` has the remedy in it. */
export function findNeutralRatings(study: ProjectStudy, ruleSet: RuleSet): RemedyFigure[] {
  const { z0, kv } = findPlant(study);
  if (!z0) return [];
  const { states, model, poi } = makeScreening(study, ruleSet);
  const duty = findNeutralDuty(states.after, poi, scale(z0, 1 / baseOhms(model.baseMva, kv)));
  const continuous = findContinuousNeutralAmps({ kv, z0Ohms: z0, standingPercent });
  const figures: RemedyFigure[] = [
    {
      words: 'Neutral current all the time',
      value: continuous,
      unit: 'A',
      source: `standing unbalance of ${standingPercent} % (common practice; value from memory)`,
    },
  ];
  if (!duty) return figures;
  const source = `worst ground fault with the utility in, at ${duty.node}`;
  return [{ words: 'Neutral current for ten seconds', value: duty.amps, unit: 'A', source }, ...figures];
}
