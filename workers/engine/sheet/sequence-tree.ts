import type { CaseChoice, Model, Shunt } from '../case.ts';
import { allPhases, isMember, isPresent } from '../case.ts';
import type { Complex } from '../complex.ts';
import { add, divide } from '../complex.ts';
import type { Upstream } from '../findings/upstream.ts';

/*
 * One sequence network as a tree seen from a place, for as long as it is one: each node with what ties it to earth, and the
 * branches that lead further out. Only what leads to a tie is kept. Added up from its leaves it gives the driving-point
 * impedance of the place without a matrix, the way a person would do it.
 */

export type Sequence = 'z1' | 'z2' | 'z0';

export type Tie = { kind: 'source' | 'machine' | 'bank' | 'transformer'; id: string; z: Complex };

export type TreeNode = {
  readonly node: number;
  readonly ties: Tie[];
  /** Nodes further out; the branch between is an index of the model, -1 a closed switch. */
  readonly children: { branch: number; child: TreeNode }[];
  /** To earth, seen from here outwards; filled from the leaves on. */
  z: Complex | null;
  /** Ties and branches from here outwards. */
  size: number;
};

/** Builds the tree of a sequence, nothing where the network has a loop. `upstream` is traced for the same choice. */
export function growTree(
  model: Model,
  choice: CaseChoice,
  upstream: Upstream,
  root: number,
  sequence: Sequence,
): TreeNode | undefined {
  const { graph, branchOfEdge } = upstream;
  const ties = listTies(model, choice, sequence);
  const nodes = new Map<number, TreeNode>();
  const order: { tree: TreeNode; parent?: TreeNode; branch: number; edge: number }[] = [];
  const reach = (node: number, branch: number, edge: number, parent?: TreeNode) => {
    const tree: TreeNode = { node, ties: ties.get(node) ?? [], children: [], z: null, size: 0 };
    nodes.set(node, tree);
    order.push({ tree, parent, branch, edge });
  };
  reach(root, -1, -1);
  for (let head = 0; head < order.length; head++) {
    const { tree, edge } = order[head]!;
    for (let p = graph.start[tree.node]!; p < graph.start[tree.node + 1]!; p++) {
      const along = graph.edge[p]!;
      const branch = branchOfEdge[along]!;
      if (along === edge || !leadsOn(model, branch, sequence)) continue;
      if (nodes.has(graph.neighbour[p]!)) return undefined;
      reach(graph.neighbour[p]!, branch, along, tree);
    }
  }
  for (let k = order.length - 1; k >= 0; k--) {
    const { tree, parent, branch } = order[k]!;
    addUp(model, tree, sequence);
    if (parent && tree.z) parent.children.push({ branch, child: tree });
  }
  return nodes.get(root);
}

/** Whether a sequence goes on through a branch; laterals end in nothing that ties to earth. */
function leadsOn(model: Model, branch: number, sequence: Sequence): boolean {
  if (branch === -1) return true;
  const { phases, zeroSequence } = model.branches[branch]!;
  return phases === allPhases && (sequence !== 'z0' || zeroSequence.kind === 'series');
}

/** Impedance of a branch in a sequence. */
export function seriesOf(model: Model, branch: number, sequence: Sequence): Complex {
  const { z1, zeroSequence } = model.branches[branch]!;
  return sequence === 'z0' && zeroSequence.kind !== 'open' ? zeroSequence.z : z1;
}

const unity: Complex = { re: 1, im: 0 };

function addUp(model: Model, tree: TreeNode, sequence: Sequence): void {
  let y: Complex = { re: 0, im: 0 };
  for (const { z } of tree.ties) y = add(y, divide(unity, z));
  tree.size = tree.ties.length;
  for (const { branch, child } of tree.children) {
    const z = branch === -1 ? child.z! : add(child.z!, seriesOf(model, branch, sequence));
    y = add(y, divide(unity, z));
    tree.size += child.size + (branch === -1 ? 0 : 1);
  }
  tree.z = tree.ties.length + tree.children.length === 0 ? null : divide(unity, y);
}

/** By node: what ties it to earth in this sequence. */
function listTies(model: Model, choice: CaseChoice, sequence: Sequence): Map<number, Tie[]> {
  const ties = new Map<number, Tie[]>();
  const tie = (kind: Tie['kind'], node: number, { id }: { id: string }, z: Complex | null) => {
    if (!z) return;
    const atNode = ties.get(node) ?? [];
    ties.set(node, atNode);
    atNode.push({ kind, id, z });
  };
  const tieShunt = (kind: Tie['kind'], shunt: Shunt) => {
    if (isPresent(choice, shunt)) tie(kind, shunt.node, shunt, shunt[sequence]);
  };
  if (choice.sources !== 'out') {
    for (const { max, min } of model.sources) tieShunt('source', choice.sources === 'max' ? max : min);
  }
  for (const machine of model.machines) {
    if (isMember(choice.machines, machine.ofProject)) tieShunt('machine', machine);
  }
  for (const bank of model.groundingBanks) {
    if (isMember(choice.groundingBanks, bank.ofProject)) tieShunt('bank', bank);
  }
  if (sequence !== 'z0') return ties;
  for (const branch of model.branches) {
    const { zeroSequence } = branch;
    if (zeroSequence.kind !== 'shunt' || !isPresent(choice, branch)) continue;
    const isThere =
      isPresent(choice, model.nodes[branch.from]!) && isPresent(choice, model.nodes[branch.to]!);
    if (isThere) tie('transformer', branch[zeroSequence.end], branch, zeroSequence.z);
  }
  return ties;
}
