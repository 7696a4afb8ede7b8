import type { SequenceName, SheetNetwork, SheetState } from '../../../shared/schemas/sheets.ts';
import type { Complex } from '../complex.ts';
import type { Screening } from '../findings/screening.ts';
import { traceUpstream } from '../findings/upstream.ts';
import { drivingPoint } from '../sequence-networks.ts';
import { busOfNode } from '../solve-case.ts';
import { Working } from '../working.ts';
import type { Conversions } from './conversions.ts';
import { agree, reduceTree } from './reduce-network.ts';
import type { Sequence } from './sequence-tree.ts';
import { growTree } from './sequence-tree.ts';

export const sheetStates = ['none', 'before', 'after'] as const satisfies SheetState[];

const sequences = [
  ['positive', 'z1'],
  ['negative', 'z2'],
  ['zero', 'z0'],
] as const satisfies [SequenceName, Sequence][];

/** Reduces the three sequence networks to the point of interconnection in each state, the tap where that is on a lateral. */
export function listNetworks(screening: Screening, conversions: Conversions): SheetNetwork[] {
  const networks: SheetNetwork[] = [];
  for (const state of sheetStates) {
    for (const [name, sequence] of sequences) {
      const z = findImpedance(screening, state, sequence);
      const same = networks.find((each) => isAlike(each, { state, name, z }));
      const shared = { state, sequence: name, z };
      if (same) {
        const { state: other, sequence: otherName } = same.sameAs ?? same;
        const sameAs = { state: other, sequence: otherName };
        networks.push({ ...shared, sameAs, isAddedUp: same.isAddedUp, steps: [] });
      } else networks.push({ ...shared, ...reduce(screening, conversions, state, sequence, z) });
    }
  }
  return networks;
}

function isAlike(
  network: SheetNetwork,
  { state, name, z }: { state: SheetState; name: SequenceName; z: Complex | null },
): boolean {
  const isComparable = network.sequence === name || (network.state === state && name === 'negative');
  if (!isComparable || !z || !network.z || typeof network.z === 'number') return false;
  return agree(network.z, z);
}

function findImpedance({ states, poi }: Screening, state: SheetState, sequence: Sequence): Complex | null {
  const solved = states[state];
  const { positive, negative, zero } = solved.networks;
  const network = { z1: positive, z2: negative, z0: zero }[sequence];
  const bus = busOfNode(solved, poi);
  return bus !== -1 && network.hasPath[bus] ? drivingPoint(network, bus) : null;
}

function reduce(
  { states, poi }: Screening,
  conversions: Conversions,
  state: SheetState,
  sequence: Sequence,
  z: Complex | null,
): Pick<SheetNetwork, 'isAddedUp' | 'steps'> {
  if (!z) return { isAddedUp: false, steps: [] };
  const { choice, model, topology } = states[state];
  const upstream = traceUpstream(model, choice, poi);
  const root = upstream.path.find((node) => topology.busOf[node] !== -1)!;
  const tree = growTree(model, choice, upstream, root, sequence);
  if (tree?.z && agree(tree.z, z)) {
    return { isAddedUp: true, steps: reduceTree(conversions, tree, sequence, new Set(upstream.path), z) };
  }
  const working = new Working();
  const words = 'the whole network, reduced by elimination since it has loops';
  working.given(sequence.toUpperCase(), words, z, 'pu');
  return { isAddedUp: false, steps: working.steps };
}
