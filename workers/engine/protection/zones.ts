import type { Device, Study } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import { allPhases } from '../case.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import type { Upstream } from '../findings/upstream.ts';
import { wiringOf } from '../wiring.ts';
import { isSectionalizing } from '../findings/upstream.ts';

/*
 * The zone of a device: from it, away from the source, to the next automatic device or the end of the line. It leaves out
 * what belongs to a generator's own site and what transformers step down to low voltage: that has its own protection.
 */

const primaryAboveKv = 1;

export type Zone = {
  readonly device: Device;
  readonly branch: number;
  readonly end: 'from' | 'to';
  /** Where the device stands, and where its zone begins. */
  readonly node: number;
  readonly near: number;
  /** The end of the branch that looks at the source. */
  readonly sourceSide: number;
};

/** Which faults the zone is walked for: those between phases need two of them, those to ground a zero-sequence path. */
export type ZoneKind = 'phase' | 'ground';

/** The way the feeder is fed: by node where it is fed from, and over which edge of the graph; -1 at sources and beyond. */
export type Feeding = { readonly cameFrom: Int32Array; readonly cameBy: Int32Array };

/** Finds from where each node is fed, by the fewest branches. */
export function traceFeeding({ graph, isSource }: Upstream): Feeding {
  const cameFrom = new Int32Array(isSource.length).fill(-1);
  const cameBy = new Int32Array(isSource.length).fill(-1);
  const queue = new Int32Array(isSource.length);
  let tail = 0;
  isSource.forEach((yes, node) => {
    if (yes) queue[tail++] = node;
  });
  for (let head = 0; head < tail; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (isSource[v] || cameFrom[v] !== -1) continue;
      cameFrom[v] = u;
      cameBy[v] = graph.edge[p]!;
      queue[tail++] = v;
    }
  }
  return { cameFrom, cameBy };
}

/**
 * Lists the devices whose currents the project can lower: those on its way to the source, and those in a loop. Beyond any
 * other a source more only raises what a fault draws. From the source outwards.
 */
export function listZones(
  study: Study,
  model: Model,
  upstream: Upstream,
  { cameFrom }: Feeding,
  isInLoop: (branch: number) => boolean,
): Zone[] {
  const place = new Map(upstream.branches.map((branch, index) => [branch, index]));
  const distance = (branch: number) => place.get(branch) ?? -1;
  return (study.feeder.devices ?? [])
    .map((device): Zone => {
      const branch = model.branchIndex.get(device.branch)!;
      const { from, to } = branchAt(model, branch);
      const isFedFromFrom = cameFrom[to] === from || cameFrom[from] !== to;
      const near = isFedFromFrom ? to : from;
      const sourceSide = isFedFromFrom ? from : to;
      return { device, branch, end: device.end, node: branchAt(model, branch)[device.end], near, sourceSide };
    })
    .filter(({ device, branch }) => isAutomatic(device) && (place.has(branch) || isInLoop(branch)))
    .sort((p, q) => distance(q.branch) - distance(p.branch));
}

function isAutomatic(device: Device): boolean {
  return isSectionalizing(device) || device.phasePickupA !== undefined || device.groundPickupA !== undefined;
}

/** Makes a finder of the ends of zones in one operating case; `fusesBound` makes fuses end a zone too. */
export function findZoneEnds(
  study: Study,
  model: Model,
  { graph, branchOfEdge }: Upstream,
  { cameBy }: Feeding,
  fusesBound: boolean,
): (zone: Zone, kind: ZoneKind) => number[] {
  const ending = new Map<number, Set<number>>();
  for (const device of study.feeder.devices ?? []) {
    if (!isSectionalizing(device) && !(fusesBound && device.kind === 'fuse')) continue;
    const branch = model.branchIndex.get(device.branch)!;
    const places = ending.get(branch) ?? new Set();
    ending.set(branch, places.add(branchAt(model, branch)[device.end]));
  }

  return (zone, kind) => {
    if (!goesThrough(model, zone.branch, zone.node === zone.near, kind)) return [];
    // A second device at the other end of the same line takes over there.
    if (zone.node !== zone.near && ending.get(zone.branch)?.has(zone.near)) return [zone.near];
    const ends: number[] = [];
    const stack = [zone.near];
    while (stack.length > 0) {
      const u = stack.pop()!;
      let isLast = true;
      for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
        const v = graph.neighbour[p]!;
        const edge = graph.edge[p]!;
        // What feeds u is where the walk came from.
        if (cameBy[v] !== edge || !belongs(model, v, branchOfEdge[edge]!, kind)) continue;
        isLast = false;
        const bounds = ending.get(branchOfEdge[edge]!);
        if (!bounds) stack.push(v);
        else ends.push(bounds.has(u) ? u : v);
      }
      if (isLast) ends.push(u);
    }
    return [...new Set(ends)];
  };
}

/** Whether a fault beyond the zone's own branch shows at the device: the far side of a star-delta transformer hides earth currents. */
function goesThrough(model: Model, branch: number, isBeyond: boolean, kind: ZoneKind): boolean {
  const { phases, zeroSequence } = branchAt(model, branch);
  if (kind === 'phase') return hasTwo(phases);
  if (phases !== allPhases || zeroSequence.kind === 'series') return true;
  return zeroSequence.kind === 'shunt' && isBeyond;
}

function belongs(model: Model, node: number, branch: number, kind: ZoneKind): boolean {
  const { kv, ofProject, companion, phases } = nodeAt(model, node);
  if (ofProject || companion || kv <= primaryAboveKv) return false;
  if (kind === 'phase') return hasTwo(phases);
  if (branch === -1) return true;
  return wiringOf(model).zeroGoesThrough[branch] === 1 || branchAt(model, branch).phases !== allPhases;
}

function hasTwo(phases: number): boolean {
  return (phases & (phases - 1)) !== 0;
}
