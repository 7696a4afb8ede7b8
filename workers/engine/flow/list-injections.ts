import type { Inverter, Load, Machine, Study } from '../../../shared/schemas/study.ts';
import type { Capacitor } from '../../../shared/schemas/study-utility.ts';
import { allPhases, isPresent } from '../case.ts';
import { phaseSet } from '../per-unit.ts';
import { eachElement } from '../study-elements.ts';
import type { FlowNetwork } from './flow-network.ts';
import type { FlowLoad, Injections, SwitchedCapacitor, VoltVarUnit } from './injections.ts';
import { constantCurrent, constantImpedance, constantPower, outputOf } from './injections.ts';
import { vectorSize } from './matrix3.ts';

/* From the study's lists to what is drawn and sent at each place. */

const models = { power: constantPower, current: constantCurrent, impedance: constantImpedance } as const;

/** Which loads have no value for this; a flow without them would say nothing. */
export function listLoadsWithout(study: Study, load: FlowLoad): string[] {
  if (load === 'peak') return [];
  return Array.from(eachElement(study, 'loads')).flatMap(({ element }) =>
    (element as Load).minimumKw === undefined ? [element.id] : [],
  );
}

type Lists = {
  terms: Injections['terms'];
  balanced: Injections['balanced'];
  switched: SwitchedCapacitor[];
  following: VoltVarUnit[];
  /** What is tied to a neutral that its place does not have. */
  untied: string[];
};

/** The lists as they grow, and where their elements go. */
class InjectionLists {
  readonly lists: Lists = {
    terms: { plus: [], minus: [], p: [], q: [], model: [] },
    balanced: { at: [], p: [], q: [] },
    switched: [],
    following: [],
    untied: [],
  };
  /** A phase's share of the base. */
  readonly kvaOfPhase: number;
  private readonly network: FlowNetwork;
  private readonly isFloating: Uint8Array;

  constructor(network: FlowNetwork, isFloating: Uint8Array) {
    this.network = network;
    this.isFloating = isFloating;
    this.kvaOfPhase = (network.model.baseMva * 1000) / 3;
  }

  placeOf(element: { id: string; node: string; with?: string }, ofProject: boolean): number {
    const { choice, placeOf, model } = this.network;
    const isThere = isPresent(choice, { id: element.id, ofProject, companion: element.with !== undefined });
    return isThere ? placeOf[model.nodeIndex.get(element.node)!]! : -1;
  }

  /** Shares kW and kvar drawn among phases; where nothing is earthed a star's own point floats, which makes it a delta. */
  draw(
    place: number,
    { id, phases }: { id: string; phases: string },
    kw: number,
    kvar: number,
    model: number,
    isDelta: boolean,
  ): void {
    const letters = phaseSet(phases) & this.network.phases[place]!;
    const list = [0, 1, 2].filter((phase) => letters & (1 << phase));
    if (list.length === 1 && this.isFloating[place]) this.lists.untied.push(id);
    const between = list.length > 1 && (isDelta || this.isFloating[place] === 1);
    const ends: (readonly [number, number])[] = !between
      ? list.map((phase) => [phase, -1] as const)
      : list.length === 2
        ? [[list[0]!, list[1]!]]
        : [
            [0, 1],
            [1, 2],
            [2, 0],
          ];
    const { terms } = this.lists;
    for (const [plus, minus] of ends) {
      terms.plus.push(place * vectorSize + 2 * plus);
      terms.minus.push(minus === -1 ? -1 : place * vectorSize + 2 * minus);
      terms.p.push(kw / this.kvaOfPhase / ends.length);
      terms.q.push(kvar / this.kvaOfPhase / ends.length);
      terms.model.push(model);
    }
  }

  addLoad(load: Load, ofProject: boolean, at: FlowLoad): void {
    const place = this.placeOf(load, ofProject);
    if (place === -1) return;
    const kw = at === 'peak' ? load.kw : (load.minimumKw ?? 0);
    const kvar = at === 'peak' || load.kw === 0 ? load.kvar : (load.kvar * kw) / load.kw;
    this.draw(place, load, kw, kvar, models[load.model ?? 'power'], load.connection === 'delta');
  }

  addCapacitor(capacitor: Capacitor, ofProject: boolean): void {
    const place = this.placeOf(capacitor, ofProject);
    if (place === -1) return;
    const { terms, switched } = this.lists;
    const first = terms.plus.length;
    this.draw(place, capacitor, 0, -capacitor.kvar, constantImpedance, false);
    const count = terms.plus.length - first;
    if (!capacitor.switchedByVoltage || count === 0) return;
    const [on, off] = capacitor.switchedByVoltage;
    switched.push({ id: capacitor.id, first, count, q: terms.q[first]!, on, off });
    terms.q.fill(0, first, first + count);
  }

  addMachine(machine: Machine, ofProject: boolean): void {
    const place = this.placeOf(machine, ofProject);
    const { kw, kvar } = outputOf(machine);
    if (place !== -1) this.sendBalanced(place, kw, kvar);
  }

  addInverter(inverter: Inverter, ofProject: boolean): void {
    const place = this.placeOf(inverter, ofProject);
    if (place === -1) return;
    const { kw, kvar } = outputOf(inverter);
    const { terms, balanced, following } = this.lists;
    const phases = phaseSet(inverter.phases);
    const first = terms.plus.length;
    if (phases === allPhases) this.sendBalanced(place, kw, kvar);
    else this.draw(place, inverter, -kw, -kvar, constantPower, true);
    if (!inverter.voltVar) return;
    following.push({
      at: place * vectorSize,
      phases,
      balanced: phases === allPhases ? balanced.at.length - 1 : -1,
      first,
      count: terms.plus.length - first,
      curve: inverter.voltVar,
      size: inverter.kva / this.kvaOfPhase,
      room: Math.sqrt(Math.max(0, inverter.kva ** 2 - kw ** 2)) / this.kvaOfPhase,
    });
  }

  private sendBalanced(place: number, kw: number, kvar: number): void {
    const { balanced } = this.lists;
    balanced.at.push(place * vectorSize);
    balanced.p.push(kw / this.kvaOfPhase / 3);
    balanced.q.push(kvar / this.kvaOfPhase / 3);
  }
}

/** Lists all that a case has; loads at their peak or at their minimum, with vars in the same proportion. */
export function listInjections(
  study: Study,
  network: FlowNetwork,
  isFloating: Uint8Array,
  load: FlowLoad,
  withGeneration: boolean,
): Lists {
  const made = new InjectionLists(network, isFloating);
  for (const { element, ofProject } of eachElement(study, 'loads'))
    made.addLoad(element as Load, ofProject, load);
  for (const { element, ofProject } of eachElement(study, 'capacitors'))
    made.addCapacitor(element as Capacitor, ofProject);
  if (!withGeneration) return made.lists;
  for (const { element, ofProject } of eachElement(study, 'machines'))
    made.addMachine(element as Machine, ofProject);
  for (const { element, ofProject } of eachElement(study, 'inverters'))
    made.addInverter(element as Inverter, ofProject);
  return made.lists;
}
