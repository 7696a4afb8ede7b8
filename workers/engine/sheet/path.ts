import type { SheetPlace, SheetShunt, SheetState } from '../../../shared/schemas/sheets.ts';
import type { StudyResult } from '../../../shared/schemas/study-result.ts';
import type { Branch, Model } from '../case.ts';
import { isPresent } from '../case.ts';
import type { Screening } from '../findings/screening.ts';
import { growTree } from './sequence-tree.ts';
import type { TreeNode } from './sequence-tree.ts';

/** Lists the way from the source to the point of interconnection, place by place, with the fault currents along it. */
export function listPath(screening: Screening, result: StudyResult): SheetPlace[] {
  const { study, model, upstream } = screening;
  const nodes = [...upstream.path].reverse();
  const branches = [...upstream.branches].reverse();
  const lines = new Map((study.feeder.lines ?? []).map((line) => [line.id, line]));
  const transformers = new Map((study.feeder.transformers ?? []).map((each) => [each.id, each]));
  const branching = findBranching(screening);
  const shunts = listShunts(screening);
  const devices = groupDevices(screening);
  let next = 0;
  let km = 0;
  return nodes.map((node, place): SheetPlace => {
    const { id, kv } = model.nodes[node]!;
    const before = nodes[place - 1];
    const branch = before === undefined ? undefined : joining(model.branches[branches[next]!], before, node);
    if (branch) next++;
    const length = branch ? (lines.get(branch.id)?.km ?? 0) : 0;
    km += length;
    const isTransformer = branch !== undefined && transformers.has(branch.id);
    return {
      node: id,
      kv,
      km,
      ...(before !== undefined && {
        by: branch
          ? {
              kind: isTransformer ? ('transformer' as const) : ('line' as const),
              id: branch.id,
              km: length,
              ...(isTransformer && { connection: transformers.get(branch.id)!.connection }),
              ...describeImpedances(branch, before),
            }
          : {
              kind: 'switch' as const,
              id: findSwitch(model, before, node),
              km: 0,
              z1: null,
              z0: null,
              zeroSequence: 'series' as const,
            },
      }),
      devices: branch ? (devices.get(branch.id) ?? []) : [],
      shunts: shunts.feeder.get(node) ?? [],
      ofProject: node === screening.poi ? shunts.project : [],
      branchesOff: branching.has(node),
      threePhaseA: currentsAt(result, id, 'threePhase'),
      lineGroundA: currentsAt(result, id, 'lineGround'),
    };
  });
}

function joining(branch: Branch | undefined, u: number, v: number): Branch | undefined {
  if (!branch) return undefined;
  const isIt = (branch.from === u && branch.to === v) || (branch.from === v && branch.to === u);
  return isIt ? branch : undefined;
}

function findSwitch({ switches }: Model, u: number, v: number): string {
  const link = switches.find(({ from, to }) => (from === u && to === v) || (from === v && to === u));
  return link?.id ?? 'switch';
}

function describeImpedances(
  { z1, zeroSequence, from }: Branch,
  before: number,
): Pick<NonNullable<SheetPlace['by']>, 'z1' | 'z0' | 'zeroSequence'> {
  if (zeroSequence.kind === 'open') return { z1, z0: null, zeroSequence: 'open' };
  if (zeroSequence.kind === 'series') return { z1, z0: zeroSequence.z, zeroSequence: 'series' };
  const isBefore = (zeroSequence.end === 'from') === (from === before);
  return { z1, z0: zeroSequence.z, zeroSequence: isBefore ? 'earthed-before' : 'earthed-after' };
}

function groupDevices({ study }: Screening): Map<string, string[]> {
  const devices = new Map<string, string[]>();
  for (const { id, branch } of study.feeder.devices ?? []) {
    devices.set(branch, [...(devices.get(branch) ?? []), id]);
  }
  return devices;
}

/** Of the feeder by node, and of the project all together. */
function listShunts({ model, states }: Screening): {
  feeder: Map<number, SheetShunt[]>;
  project: SheetShunt[];
} {
  const feeder = new Map<number, SheetShunt[]>();
  const project: SheetShunt[] = [];
  const { choice } = states.after;
  const put = (
    kind: SheetShunt['kind'],
    { id, node, ofProject }: { id: string; node: number; ofProject: boolean },
  ) => {
    if (ofProject) project.push({ kind, id });
    else feeder.set(node, [...(feeder.get(node) ?? []), { kind, id }]);
  };
  for (const { max } of model.sources) if (isPresent(choice, max)) put('source', max);
  for (const machine of model.machines) put('machine', machine);
  for (const bank of model.groundingBanks) put('bank', bank);
  for (const inverter of model.inverters) put('inverter', inverter);
  return { feeder, project };
}

/** Nodes of the path where something that feeds or earths hangs off it; nothing is said of a network with loops. */
function findBranching({ states, upstream }: Screening): Set<number> {
  const { model, choice, topology } = states.after;
  const found = new Set<number>();
  const onPath = new Set(upstream.path);
  const root = upstream.path.find((node) => topology.busOf[node] !== -1);
  for (const sequence of root === undefined ? [] : (['z1', 'z0'] as const)) {
    const tree = growTree(model, choice, upstream, root!, sequence);
    for (let each: TreeNode | undefined = tree; each;) {
      const { children, node }: TreeNode = each;
      if (children.some(({ child }) => !onPath.has(child.node))) found.add(node);
      each = children.find(({ child }) => onPath.has(child.node))?.child;
    }
  }
  return found;
}

function currentsAt(result: StudyResult, id: string, kind: 'threePhase' | 'lineGround') {
  const report = result.nodes[id];
  const read = (state: SheetState) => report?.[state]?.[kind] ?? null;
  return { none: read('none'), before: read('before'), after: read('after') };
}
