import type { Inverter, Load, Machine } from '../../../shared/schemas/study.ts';
import type { Capacitor } from '../../../shared/schemas/study-utility.ts';
import type { CaseChoice } from '../case.ts';
import { allPhases, isPresent } from '../case.ts';
import { phaseSet } from '../per-unit.ts';
import { eachElement } from '../study-elements.ts';
import type { Screening } from '../findings/screening.ts';
import type { Cuts } from '../findings/upstream.ts';
import { outputOf } from './injections.ts';

/*
 * What flows back towards the source through each branch on the way to it, by phase: all generation beyond at full export
 * less the minimum load there. Losses are left out, which is on the safe side.
 */

export type NetExport = {
  /** By phase A, B, C: kW towards the source, negative where load is more, and kvar either way. */
  kw: [number, number, number];
  kvar: [number, number, number];
  generationKw: number;
  loadKw: number;
  /** Loads beyond whose minimum is not known, counted as nothing. */
  unknownLoads: number;
};

/** Adds up, for each branch of the path, what lies beyond it; `since` says from which branch on a node does. */
export function addUpExports(
  { study, model }: Pick<Screening, 'study' | 'model'>,
  choice: CaseChoice,
  { since }: Cuts,
  count: number,
): NetExport[] {
  const sums: NetExport[] = Array.from({ length: count }, () => ({
    kw: [0, 0, 0],
    kvar: [0, 0, 0],
    generationKw: 0,
    loadKw: 0,
    unknownLoads: 0,
  }));
  const sumAt = (element: { id: string; node: string; with?: string }, ofProject: boolean) => {
    if (!isPresent(choice, { id: element.id, ofProject, companion: element.with !== undefined }))
      return undefined;
    const first = since[model.nodeIndex.get(element.node)!]!;
    return first === -1 ? undefined : sums[first];
  };
  const add = (sum: NetExport, phases: number, kw: number, kvar: number) => {
    const list = [0, 1, 2].filter((phase) => phases & (1 << phase));
    for (const phase of list) {
      sum.kw[phase]! += kw / list.length;
      sum.kvar[phase]! += kvar / list.length;
    }
  };
  for (const kind of ['machines', 'inverters'] as const) {
    for (const { element, ofProject } of eachElement(study, kind)) {
      const generator = element as Machine | Inverter;
      const sum = sumAt(generator, ofProject);
      if (!sum) continue;
      const { kw, kvar } = outputOf(generator);
      add(sum, 'phases' in generator ? phaseSet(generator.phases) : allPhases, kw, kvar);
      sum.generationKw += kw;
    }
  }
  for (const { element, ofProject } of eachElement(study, 'loads')) {
    const load = element as Load;
    const sum = sumAt(load, ofProject);
    if (!sum) continue;
    if (load.minimumKw === undefined) sum.unknownLoads++;
    else {
      const share = load.kw > 0 ? load.minimumKw / load.kw : 1;
      add(sum, phaseSet(load.phases), -load.minimumKw, -load.kvar * share);
      sum.loadKw += load.minimumKw;
    }
  }
  for (const { element, ofProject } of eachElement(study, 'capacitors')) {
    const capacitor = element as Capacitor;
    const sum = sumAt(capacitor, ofProject);
    // One that the voltage switches need not be on.
    if (sum && !capacitor.switchedByVoltage) add(sum, phaseSet(capacitor.phases), 0, capacitor.kvar);
  }
  for (let k = 1; k < count; k++) {
    const [sum, inner] = [sums[k]!, sums[k - 1]!];
    for (let phase = 0; phase < 3; phase++) {
      sum.kw[phase]! += inner.kw[phase]!;
      sum.kvar[phase]! += inner.kvar[phase]!;
    }
    sum.generationKw += inner.generationKw;
    sum.loadKw += inner.loadKw;
    sum.unknownLoads += inner.unknownLoads;
  }
  return sums;
}

/** The phase through which most flows back, undefined where nothing does. */
export function findReversePhase({
  kw,
  kvar,
}: NetExport): { phase: number; kw: number; kvar: number } | undefined {
  let worst: { phase: number; kw: number; kvar: number } | undefined;
  for (let phase = 0; phase < 3; phase++) {
    if (kw[phase]! <= 1e-9) continue;
    if (!worst || Math.hypot(kw[phase]!, kvar[phase]!) > Math.hypot(worst.kw, worst.kvar))
      worst = { phase, kw: kw[phase]!, kvar: kvar[phase]! };
  }
  return worst;
}
