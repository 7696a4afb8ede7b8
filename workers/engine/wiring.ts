import type { Branch, Model } from './case.ts';
import { allPhases } from './case.ts';
import type { Complex } from './complex.ts';

/*
 * The model as typed arrays, by node and by branch: what walks over a whole network reads these and no objects. Made once
 * for a model, which never changes; a copy with other values is another model.
 */

export const ofProjectFlag = 1;
export const companionFlag = 2;

export type Wiring = {
  readonly nodeFlags: Uint8Array;
  readonly nodePhases: Uint8Array;
  /** 1 where a node has all three phases. */
  readonly isThreePhase: Uint8Array;
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly branchFlags: Uint8Array;
  readonly clockHours: Int32Array;
  readonly z1Re: Float64Array;
  readonly z1Im: Float64Array;
  /** Zero sequence, where it goes through. */
  readonly z0Re: Float64Array;
  readonly z0Im: Float64Array;
  readonly zeroGoesThrough: Uint8Array;
  /** Whether all branches are alike in that. */
  readonly allGoThrough: boolean;
  readonly anyShift: boolean;
  /** Zero-sequence shunts at one end of a branch. */
  readonly earths: readonly Earth[];
  /** Self and mutual impedance of lines with one or two phases; empty where there are none. */
  readonly selfRe: Float64Array;
  readonly selfIm: Float64Array;
  readonly mutualRe: Float64Array;
  readonly mutualIm: Float64Array;
  /** All flags of nodes, branches and switches together. */
  readonly flags: number;
};

export type Earth = { branch: number; end: 'from' | 'to'; z: Complex };

const known = new WeakMap<Model, Wiring>();

export function wiringOf(model: Model): Wiring {
  let wiring = model.wiring ?? known.get(model);
  if (!wiring) {
    wiring = layOut(model);
    known.set(model, wiring);
  }
  return wiring;
}

/** Tells what the wiring of a new model is, which else is laid out from its lists. */
export function rememberWiring(model: Model, wiring: Wiring): void {
  known.set(model, wiring);
}

function layOut({ nodes, branches, switches }: Model): Wiring {
  const nodeFlags = new Uint8Array(nodes.length);
  const nodePhases = new Uint8Array(nodes.length);
  const isThreePhase = new Uint8Array(nodes.length);
  let flags = 0;
  for (let index = 0; index < nodes.length; index++) {
    const node = nodes[index]!;
    nodeFlags[index] = flagsOf(node);
    flags |= nodeFlags[index]!;
    nodePhases[index] = node.phases;
    isThreePhase[index] = node.phases === allPhases ? 1 : 0;
  }
  for (const link of switches) flags |= flagsOf(link);
  const count = branches.length;
  const from = new Int32Array(count);
  const to = new Int32Array(count);
  const branchFlags = new Uint8Array(count);
  const clockHours = new Int32Array(count);
  const [z1Re, z1Im, z0Re, z0Im] = [0, 1, 2, 3].map(() => new Float64Array(count)) as Float64Array[];
  const zeroGoesThrough = new Uint8Array(count);
  const earths: Earth[] = [];
  let allGoThrough = true;
  let anyShift = false;
  for (let index = 0; index < count; index++) {
    const branch = branches[index]!;
    from[index] = branch.from;
    to[index] = branch.to;
    branchFlags[index] = flagsOf(branch);
    flags |= branchFlags[index]!;
    clockHours[index] = branch.clockHour;
    if (branch.clockHour !== 0) anyShift = true;
    z1Re![index] = branch.z1.re;
    z1Im![index] = branch.z1.im;
    const path = branch.zeroSequence;
    if (path.kind === 'series') {
      zeroGoesThrough[index] = 1;
      z0Re![index] = path.z.re;
      z0Im![index] = path.z.im;
    } else {
      allGoThrough = false;
      if (path.kind === 'shunt') earths.push({ branch: index, end: path.end, z: path.z });
    }
  }
  return {
    nodeFlags,
    nodePhases,
    isThreePhase,
    from,
    to,
    branchFlags,
    clockHours,
    z1Re: z1Re!,
    z1Im: z1Im!,
    z0Re: z0Re!,
    z0Im: z0Im!,
    zeroGoesThrough,
    allGoThrough,
    anyShift,
    earths,
    ...layOutPaths(branches),
    flags,
  };
}

function layOutPaths(branches: readonly Branch[]) {
  const count = branches.some(({ phases }) => phases !== allPhases) ? branches.length : 0;
  const [selfRe, selfIm, mutualRe, mutualIm] = [0, 1, 2, 3].map(() => new Float64Array(count)) as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  for (let index = 0; index < count; index++) {
    const { self, mutual } = branches[index]!;
    selfRe[index] = self.re;
    selfIm[index] = self.im;
    mutualRe[index] = mutual.re;
    mutualIm[index] = mutual.im;
  }
  return { selfRe, selfIm, mutualRe, mutualIm };
}

function flagsOf({ ofProject, companion }: { ofProject: boolean; companion: boolean }): number {
  return (ofProject ? ofProjectFlag : 0) | (companion ? companionFlag : 0);
}
