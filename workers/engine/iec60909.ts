import type { ElementLists, Machine, Study, Transformer } from '../../shared/schemas/study.ts';
import { eachElement } from './study-elements.ts';

/*
 * The method of IEC 60909-0:2016 as far as it differs from one prefault voltage: an equivalent source c·Un at the fault,
 * c by the voltage there, and correction factors on transformers and generators. Every value and formula here is from
 * memory (edition 2016: table 1; 6.3.3 KT; 6.6.1 KG; 6.7 KS and KSO); a person should check them against the document.
 */

/** Faults at up to 1 kV have a voltage factor of their own. */
export type VoltageLevel = 'low' | 'high';

export function levelOf(kv: number): VoltageLevel {
  return kv <= 1 ? 'low' : 'high';
}

/**
 * Gives c max and c min (table 1): above 1 kV 1.10 and 1.00; up to 1 kV, where voltage may be 10 % off, 1.10 and 0.90,
 * where it may be 6 % off, 1.05 and 0.95.
 */
export function voltageFactors(level: VoltageLevel, { options }: Study): { max: number; min: number } {
  if (level === 'high') return { max: 1.1, min: 1 };
  return options?.lowVoltageTolerancePercent === 6 ? { max: 1.05, min: 0.95 } : { max: 1.1, min: 0.9 };
}

/**
 * Gives the study with corrected impedances, for largest currents; for smallest ones all factors are 1.
 * Neutral impedances are never corrected.
 */
export function correctImpedances(study: Study): Study {
  const kvOf = nodeVoltages(study);
  const units = findUnits(study, kvOf);
  const correct = <P extends ElementLists>(part: P): P => ({
    ...part,
    ...(part.transformers && {
      transformers: part.transformers.map((transformer) => {
        const unit = units.byTransformer.get(transformer.id);
        return scaleTransformer(transformer, unit ?? networkFactor(transformer, kvOf, study));
      }),
    }),
    ...(part.machines && {
      machines: part.machines.map((machine) => {
        if (machine.kind === 'induction') return machine;
        const kv = kvOf.get(machine.node)!;
        const onRatedKv = ((machine.ratedKv ?? kv) / kv) ** 2;
        const factor = units.byMachine.get(machine.id) ?? generatorFactor(machine, kv, study);
        return scaleMachine(machine, factor * onRatedKv);
      }),
    }),
  });
  return {
    ...study,
    feeder: correct(study.feeder),
    ...(study.project && { project: correct(study.project) }),
  };
}

/** Lists what the method had to assume, or does not do. */
export function listMethodWarnings(study: Study): string[] {
  if (study.options?.method !== 'iec60909') return [];
  const warnings = [
    'IEC 60909-0: voltage factors and correction formulas are values from memory; prefaultFactor is not used.',
    'IEC 60909-0: smallest currents use resistances as given, not at the temperature at the end of the fault.',
  ];
  if ([study.feeder, study.project].some((part) => (part?.inverters ?? []).length > 0)) {
    warnings.push(
      'IEC 60909-0: inverter currents are added as phasors at their faultAngleDeg; findings also add them in magnitude.',
    );
  }
  const { byMachine } = findUnits(study, nodeVoltages(study));
  for (const { element: machine } of eachElement(study, 'machines')) {
    if (machine.kind === 'induction') continue;
    if (machine.ratedPowerFactor === undefined) {
      warnings.push(
        `Machine ${machine.id} gives no ratedPowerFactor: ${usualPowerFactor} is taken for its correction factor.`,
      );
    }
    if (byMachine.has(machine.id)) {
      warnings.push(
        `Machine ${machine.id} and its unit transformer are corrected for faults beyond the transformer; between the two IEC 60909-0 has other factors.`,
      );
    }
  }
  for (const { element: transformer } of eachElement(study, 'transformers')) {
    const { unitMachine } = transformer;
    if (unitMachine === undefined || byMachine.has(unitMachine)) continue;
    warnings.push(
      `Transformer ${transformer.id} names ${unitMachine}, which is no synchronous machine at one of its ends: both are corrected on their own.`,
    );
  }
  return warnings;
}

const usualPowerFactor = 0.8;

function sineOfRated({ ratedPowerFactor = usualPowerFactor }: Machine): number {
  return Math.sqrt(1 - ratedPowerFactor * ratedPowerFactor);
}

function reactancePu({ impedancePercent, xr }: Transformer): number {
  return (impedancePercent / 100) * Math.sin(Math.atan(xr));
}

/** KT = 0.95·c max/(1 + 0.6·xT), with c max of the network on the low-voltage side. Example: 4 %, c 1.05: 0.975. */
function networkFactor(transformer: Transformer, kvOf: ReadonlyMap<string, number>, study: Study): number {
  const lowKv = Math.min(kvOf.get(transformer.from)!, kvOf.get(transformer.to)!);
  const { max } = voltageFactors(levelOf(lowKv), study);
  return (0.95 * max) / (1 + 0.6 * reactancePu(transformer));
}

/** KG = Un/UrG·c max/(1 + xd''·sin φrG). */
function generatorFactor(machine: Machine, kv: number, study: Study): number {
  const { max } = voltageFactors(levelOf(kv), study);
  return ((kv / (machine.ratedKv ?? kv)) * max) / (1 + machine.xSubtransientPu * sineOfRated(machine));
}

/** Factors of power station units, by the ids of both of their parts. */
type Units = { byTransformer: Map<string, number>; byMachine: Map<string, number> };

function findUnits(study: Study, kvOf: ReadonlyMap<string, number>): Units {
  const units: Units = { byTransformer: new Map(), byMachine: new Map() };
  const machines = new Map(
    Array.from(eachElement(study, 'machines'), ({ element }) => [element.id, element]),
  );
  for (const { element: transformer } of eachElement(study, 'transformers')) {
    const machine = machines.get(transformer.unitMachine ?? '');
    if (machine?.kind !== 'synchronous') continue;
    if (machine.node !== transformer.from && machine.node !== transformer.to) continue;
    const factor = unitFactor(machine, transformer, kvOf, study);
    units.byTransformer.set(transformer.id, factor);
    units.byMachine.set(machine.id, factor);
  }
  return units;
}

/**
 * With an on-load tap changer KS = UnQ²/UrG²·UrTLV²/UrTHV²·c max/(1 + |xd'' − xT|·sin φrG), without
 * KSO = UnQ/UrG·UrTLV/UrTHV·c max/(1 + xd''·sin φrG), at the main tap and a generator kept at its rated voltage (pT = pG = 0).
 */
function unitFactor(
  machine: Machine,
  transformer: Transformer,
  kvOf: ReadonlyMap<string, number>,
  study: Study,
): number {
  const { from, to, ratedKvTo } = transformer;
  const outer = machine.node === from ? to : from;
  const ratedAt = (node: string) => (node === to ? (ratedKvTo ?? kvOf.get(node)!) : kvOf.get(node)!);
  const outerKv = kvOf.get(outer)!;
  const { max } = voltageFactors(levelOf(outerKv), study);
  const ratedKv = machine.ratedKv ?? kvOf.get(machine.node)!;
  const ratio = (outerKv / ratedKv) * (ratedAt(machine.node) / ratedAt(outer));
  const sine = sineOfRated(machine);
  if (!transformer.onLoadTapChanger) return (ratio * max) / (1 + machine.xSubtransientPu * sine);
  const difference = Math.abs(machine.xSubtransientPu - reactancePu(transformer));
  return (ratio * ratio * max) / (1 + difference * sine);
}

function scaleTransformer(transformer: Transformer, factor: number): Transformer {
  const { impedancePercent, zeroImpedancePercent } = transformer;
  return {
    ...transformer,
    impedancePercent: impedancePercent * factor,
    ...(zeroImpedancePercent !== undefined && { zeroImpedancePercent: zeroImpedancePercent * factor }),
  };
}

function scaleMachine(machine: Machine, factor: number): Machine {
  const { rPu, xSubtransientPu, x2Pu, x0Pu } = machine;
  return {
    ...machine,
    xSubtransientPu: xSubtransientPu * factor,
    ...(rPu !== undefined && { rPu: rPu * factor }),
    ...(x2Pu !== undefined && { x2Pu: x2Pu * factor }),
    ...(x0Pu !== undefined && { x0Pu: x0Pu * factor }),
  };
}

function nodeVoltages(study: Study): Map<string, number> {
  return new Map(Array.from(eachElement(study, 'nodes'), ({ element }) => [element.id, element.kv]));
}
