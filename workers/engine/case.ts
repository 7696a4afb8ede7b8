import type { Complex } from './complex.ts';
import { nodeAt } from './model-parts.ts';
import type { Wiring } from './wiring.ts';

/*
 * Words of the engine
 *
 * node       a place that the study file names; bus: all three-phase nodes that closed switches make one
 * core       the buses and the three-phase lines and transformers between them; it has three sequence networks
 * mesh       what is left of the core when its trees are taken off, leaf by leaf: loops and what lies between them
 * lateral    one or two phases hanging off the core; its tap is the bus where it does
 * z1 z2 z0   impedance in the positive, negative and zero sequence; y: admittance
 * Thevenin   what a network is at one place: impedances zk and the open-circuit voltages v before the fault
 * E          the prefault voltage of every source and machine, per unit of nominal
 * case       one choice of what is in and out; state: one of the four cases that a study reports
 * local      seen from the no-load voltage of the node's own phase A, so that transformer shifts fall away
 * prefault   of a current: what flows before the fault, which here comes from inverters alone
 *
 * All quantities are per unit: of baseMva and of the node's nominal voltage; a phase current is per unit of
 * Ibase = MVA·1000/(√3·kV) in A, a phase voltage of kV/√3.
 */

export const phaseA = 1;
export const phaseB = 2;
export const phaseC = 4;
export const allPhases = 7;

/** Which elements of one kind take part: all, none, only the project's, or all but the project's. */
export type Membership = 'all' | 'none' | 'project' | 'feeder';

/** A branch opened at one end: what is left of it hangs from the other. */
export type Opening = { branch: number; end: 'from' | 'to' };

/** One choice of what is in and out. */
export type CaseChoice = {
  sources: 'max' | 'min' | 'out';
  /** E. */
  prefaultFactor: number;
  machines: Membership;
  inverters: Membership;
  groundingBanks: Membership;
  /** Whether the project's own nodes, lines, transformers, switches and banks are there. */
  project: boolean;
  /** Whether elements that name in `with` the generator they came with are there. */
  companions: boolean;
  /** Branches open at one end. */
  opened?: readonly Opening[];
  /** Ids of elements of any kind that are out besides. */
  out?: ReadonlySet<string>;
  /** By id: whether a switch is closed, where it differs from the model. */
  switches?: ReadonlyMap<string, boolean>;
};

/** Whose an element is: the project's or the feeder's; a companion names in `with` the generator that it came with. */
export type Belonging = { id: string; ofProject: boolean; companion: boolean };

export type ModelNode = Belonging & { kv: number; phases: number };

/** What the zero sequence of a three-phase branch looks like; a shunt stands at one end, the other end is open. */
export type ZeroSequencePath =
  { kind: 'series'; z: Complex } | { kind: 'shunt'; end: 'from' | 'to'; z: Complex } | { kind: 'open' };

export type Branch = Belonging & {
  from: number;
  to: number;
  phases: number;
  /** z2 is the same. */
  z1: Complex;
  zeroSequence: ZeroSequencePath;
  /** Self and mutual impedance of a line with one or two phases. */
  self: Complex;
  mutual: Complex;
  /** By how many times 30° `to` lags `from`. */
  clockHour: number;
};

export type ModelSwitch = Belonging & { from: number; to: number; closed: boolean };

/** A source, machine or bank: admittance to earth in each sequence; z0 null is open. */
export type Shunt = Belonging & {
  node: number;
  z1: Complex | null;
  z2: Complex | null;
  z0: Complex | null;
};

export type ModelSource = { max: Shunt; min: Shunt };

/** The current that an inverter sends out of each of its phases, local. */
export type CurrentSource = Belonging & { node: number; phases: number; currents: PhaseTriple };

/** Phases A, B, C. */
export type PhaseTriple = readonly [Complex, Complex, Complex];

/** Index by id. */
type Index = Pick<ReadonlyMap<string, number>, 'get'>;

/** A study made ready: ids turned into indices and ohms into per unit, once for all cases. */
export type Model = {
  baseMva: number;
  nodes: readonly ModelNode[];
  nodeIndex: Index;
  branches: readonly Branch[];
  branchIndex: Index;
  switches: readonly ModelSwitch[];
  sources: readonly ModelSource[];
  machines: readonly Shunt[];
  groundingBanks: readonly Shunt[];
  inverters: readonly CurrentSource[];
  /** In a model that differs from another in its impedances alone: its own, in place of those that its branches tell. */
  wiring?: Wiring;
};

export function isMember(membership: Membership, ofProject: boolean): boolean {
  if (membership === 'all') return true;
  return membership !== 'none' && (membership === 'project') === ofProject;
}

/** Whether a node, branch, switch or bank is there at all, before anything more is asked of it. */
export function isPresent(choice: CaseChoice, element: Belonging): boolean {
  if ((!choice.project && element.ofProject) || (!choice.companions && element.companion)) return false;
  return !choice.out?.has(element.id);
}

/** Whether a branch or switch is there with both of its nodes. */
export function isInService(
  model: Model,
  choice: CaseChoice,
  element: Belonging & { from: number; to: number },
): boolean {
  const isThere = (node: number) => isPresent(choice, nodeAt(model, node));
  return isPresent(choice, element) && isThere(element.from) && isThere(element.to);
}

/** Whether a switch joins its nodes. */
export function isClosed(choice: CaseChoice, link: ModelSwitch): boolean {
  return (choice.switches?.get(link.id) ?? link.closed) && isPresent(choice, link);
}
