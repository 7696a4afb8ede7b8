import type { Line, Study } from '../../shared/schemas/study.ts';
import type { Branch } from './case.ts';
import { allPhases } from './case.ts';
import type { JoinedStudy } from './check-references.ts';
import { complexArray } from './complex.ts';
import type { ElementList } from './element-list.ts';
import { lineImpedances } from './line-impedances.ts';
import { baseOhms, phaseSet } from './per-unit.ts';
import type { ElementKind } from './study-elements.ts';
import type { Earth, Wiring } from './wiring.ts';
import { companionFlag, ofProjectFlag } from './wiring.ts';

/**
 * Lays a study out as typed arrays, without an object for any of its lines: a hundred thousand of them would cost more than
 * to solve the network. `transformers` are the branches that come after the lines.
 */
export function layOutWiring(study: Study, joined: JoinedStudy, transformers: readonly Branch[]): Wiring {
  const { nodes, lines, switches } = joined;
  const nodeFlags = flagsOfAll(nodes);
  const nodePhases = new Uint8Array(nodeFlags.length);
  const isThreePhase = new Uint8Array(nodeFlags.length);
  for (let node = 0; node < nodePhases.length; node++) {
    nodePhases[node] = phaseSet(nodes.elements[node]!.phases);
    isThreePhase[node] = nodePhases[node] === allPhases ? 1 : 0;
  }
  const branches = layOutBranches(study, joined, transformers);
  const branchFlags = flagsOfAll(lines.list, joined.transformers.list);
  const flags = [nodeFlags, branchFlags, flagsOfAll(switches.list)].map(unite);
  return {
    nodeFlags,
    nodePhases,
    isThreePhase,
    branchFlags,
    ...branches,
    flags: flags.reduce((all, those) => all | those),
  };
}

function layOutBranches(study: Study, { nodes, lines }: JoinedStudy, transformers: readonly Branch[]) {
  const { elements } = lines.list;
  const lineCount = elements.length;
  const count = lineCount + transformers.length;
  const from = new Int32Array(count);
  const to = new Int32Array(count);
  const [z1, z0] = [complexArray(count), complexArray(count)];
  const impedancesOf = lineImpedances(study);
  let hasLaterals = false;
  from.set(lines.from);
  to.set(lines.to);
  for (let index = 0; index < lineCount; index++) {
    const line = elements[index]!;
    const perKm = impedancesOf(line);
    const perOhm = line.km / baseOhms(study.baseMva, nodes.elements[from[index]!]!.kv);
    z1.re[index] = perKm.z1.r * perOhm;
    z1.im[index] = perKm.z1.x * perOhm;
    z0.re[index] = perKm.z0.r * perOhm;
    z0.im[index] = perKm.z0.x * perOhm;
    if (isLateral(line)) hasLaterals = true;
  }
  const zeroGoesThrough = new Uint8Array(count).fill(1);
  const clockHours = new Int32Array(count);
  const earths: Earth[] = [];
  transformers.forEach((branch, place) => {
    const index = lineCount + place;
    from[index] = branch.from;
    to[index] = branch.to;
    clockHours[index] = branch.clockHour;
    z1.re[index] = branch.z1.re;
    z1.im[index] = branch.z1.im;
    const path = branch.zeroSequence;
    if (path.kind === 'series') {
      z0.re[index] = path.z.re;
      z0.im[index] = path.z.im;
    } else {
      zeroGoesThrough[index] = 0;
      if (path.kind === 'shunt') earths.push({ branch: index, end: path.end, z: path.z });
    }
  });
  return {
    from,
    to,
    clockHours,
    z1Re: z1.re,
    z1Im: z1.im,
    z0Re: z0.re,
    z0Im: z0.im,
    zeroGoesThrough,
    allGoThrough: zeroGoesThrough.every((goes) => goes === 1),
    anyShift: clockHours.some((hours) => hours !== 0),
    earths,
    ...layOutPaths(elements, hasLaterals ? count : 0, z1, z0),
  };
}

/** zs = (z0 + 2·z1)/3 and zm = (z0 − z1)/3 of lines with one or two phases. */
function layOutPaths(
  lines: readonly Line[],
  count: number,
  z1: ReturnType<typeof complexArray>,
  z0: ReturnType<typeof complexArray>,
) {
  const self = complexArray(count);
  const mutual = complexArray(count);
  for (let index = 0; index < Math.min(count, lines.length); index++) {
    if (!isLateral(lines[index]!)) continue;
    self.re[index] = (z0.re[index]! + 2 * z1.re[index]!) * (1 / 3);
    self.im[index] = (z0.im[index]! + 2 * z1.im[index]!) * (1 / 3);
    mutual.re[index] = (z0.re[index]! - z1.re[index]!) * (1 / 3);
    mutual.im[index] = (z0.im[index]! - z1.im[index]!) * (1 / 3);
  }
  return { selfRe: self.re, selfIm: self.im, mutualRe: mutual.re, mutualIm: mutual.im };
}

function isLateral({ phases }: Line): boolean {
  return phases.length < 3;
}

/** Of the elements of all lists, one list after the other. */
function flagsOfAll(...lists: readonly ElementList<ElementKind>[]): Uint8Array {
  const flags = new Uint8Array(lists.reduce((total, { elements }) => total + elements.length, 0));
  let at = 0;
  for (const list of lists) {
    for (let index = 0; index < list.elements.length; index++) {
      const { with: generator } = list.elements[index] as { with?: string };
      const isOfProject = list.isOfProject(index);
      flags[at++] = (isOfProject ? ofProjectFlag : 0) | (generator === undefined ? 0 : companionFlag);
    }
  }
  return flags;
}

function unite(flags: Uint8Array): number {
  let all = 0;
  for (const each of flags) all |= each;
  return all;
}
