import type { Device } from '../../../shared/schemas/study.ts';
import type { Opening } from '../case.ts';
import { branchAt } from '../model-parts.ts';
import { wiringOf } from '../wiring.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { listSectionalizing, traceCuts } from './upstream.ts';

/* Island cases: what stays with the point of interconnection when the feeder breaker opens, or an automatic device nearer to it. */

/** One device opened in one operating case. */
export type Island = {
  readonly device: Device;
  readonly opening: Opening;
  /** The opened branch's place on the way to the source: what is cut off further out holds what is cut off nearer. */
  readonly place: number;
  /** Whether a node, by its index in the model, is left with the point of interconnection. */
  readonly holds: (node: number) => boolean;
};

/** The islands of one operating case, outermost first. */
export type IslandsOfCase = {
  readonly operating: OperatingCase;
  readonly islands: readonly Island[];
  /** Devices on the way to the source that cut nothing off, because there is another way round them. */
  readonly bypassed: readonly Device[];
};

const known = new WeakMap<Screening, readonly IslandsOfCase[]>();

/**
 * Lists the islands of the model as it stands, first, and of each scenario that leaves others; they are looked for once for
 * all questions.
 */
export function listIslands(screening: Screening): readonly IslandsOfCase[] {
  let cases = known.get(screening);
  if (!cases) {
    const [asItStands, ...scenarios] = screening.cases.map((operating) => findIslands(screening, operating));
    cases = [asItStands!, ...scenarios.filter((each) => !isAlike(screening, asItStands!, each))];
    known.set(screening, cases);
  }
  return cases;
}

/** Whether a scenario leaves the same islands, with the same in them: whatever it changes is further out. */
function isAlike({ model, study, project }: Screening, base: IslandsOfCase, other: IslandsOfCase): boolean {
  const { switches = {}, out = [] } = other.operating.solver.scenario!;
  const outermost = base.islands[0];
  const count = wiringOf(model).nodeFlags.length;
  if (!outermost || other.islands.length !== base.islands.length) return false;
  for (const [index, { device, holds }] of base.islands.entries()) {
    const like = other.islands[index]!;
    if (like.device !== device) return false;
    for (let node = 0; node < count; node++) if (holds(node) !== like.holds(node)) return false;
  }
  const isInside = (node: number) => outermost.holds(node);
  if (model.switches.some(({ id, from, closed }) => isInside(from) && (switches[id] ?? closed) !== closed)) {
    return false;
  }
  if (out.length === 0) return true;
  const isOut = new Set(out);
  const isOutInside = ({ id, node }: { id: string; node: number }) => isOut.has(id) && isInside(node);
  const branches = out
    .flatMap((id) => model.branchIndex.get(id) ?? [])
    .map((index) => branchAt(model, index));
  const outSwitches = model.switches.filter(({ id }) => isOut.has(id));
  const loads = [...(study.feeder.loads ?? []), ...(project.loads ?? [])];
  return !(
    [...branches, ...outSwitches].some(({ from, to }) => isInside(from) || isInside(to)) ||
    [...model.machines, ...model.groundingBanks, ...model.inverters].some(isOutInside) ||
    loads.some(({ id, node }) => isOutInside({ id, node: model.nodeIndex.get(node)! }))
  );
}

function findIslands({ study, model }: Screening, operating: OperatingCase): IslandsOfCase {
  const { isCut, since } = traceCuts(operating.upstream);
  const devices = listSectionalizing(study, model, operating.upstream);
  return {
    operating,
    islands: devices
      .filter(({ place }) => isCut[place])
      .map((found) => ({ ...found, holds: (node) => since[node] !== -1 && since[node]! <= found.place })),
    bypassed: devices.filter(({ place }) => !isCut[place]).map(({ device }) => device),
  };
}
