import type { Device, Impedance, Line, Load } from '../../../shared/schemas/study.ts';
import type { Section } from '../../../shared/schemas/study-utility.ts';
import { at } from './plane.ts';
import { makeFuseCurve, makeRelayCurves } from './protection.ts';
import { makeDice } from './random.ts';
import type { StrungCircuit } from './stringing.ts';
import type { SubstationPlan } from './substations.ts';

interface Conductor {
  z1: Impedance;
  z0: Impedance;
  ampacityA: number;
}

/** Overhead lines over a neutral, ohms per km: values of the usual order for a heavy, a middle and a light conductor (common practice, no source). */
const conductors: Record<'mainline' | 'branch' | 'lateral', Conductor> = {
  mainline: { z1: { r: 0.19, x: 0.4 }, z0: { r: 0.46, x: 1.22 }, ampacityA: 530 },
  branch: { z1: { r: 0.37, x: 0.43 }, z0: { r: 0.65, x: 1.27 }, ampacityA: 340 },
  lateral: { z1: { r: 0.89, x: 0.49 }, z0: { r: 1.17, x: 1.38 }, ampacityA: 180 },
};

const round = (value: number, decimals: number) => Math.round(value * 10 ** decimals) / 10 ** decimals;

export function spanId(poleId: string): string {
  return poleId.replace('-', '-L');
}

/** One line a pole: the span from its neighbour on the source's side. */
export function makeLines({ plan, poles }: StrungCircuit, busId: string): Line[] {
  return poles.map((pole) => ({
    id: spanId(pole.id),
    from: pole.parent === null ? busId : at(poles, pole.parent).id,
    to: pole.id,
    phases: pole.phases,
    km: round(pole.spanKm, 3),
    ...structuredClone(conductors[pole.carries]),
    mainline: pole.carries === 'mainline',
    circuit: plan.code,
  }));
}

/** Customers on three poles in four, a few of them large, scaled so that together they make the feeder's peak. */
export function makeLoads({ plan, poles }: StrungCircuit): Load[] {
  const dice = makeDice(plan.seed + 1);
  const drawn = poles.flatMap((pole) => {
    const isThreePhase = pole.phases === 'ABC';
    if (!dice.chance(isThreePhase ? 0.5 : 0.82)) return [];
    const size = isThreePhase && dice.chance(0.12) ? dice.between(6, 14) : dice.between(0.7, 2.4);
    return [{ pole, weight: size * (isThreePhase ? 1.6 : pole.phases.length) }];
  });
  const kwPerWeight = plan.peakKw / drawn.reduce((sum, { weight }) => sum + weight, 0);
  return drawn.map(({ pole, weight }) => {
    const kw = round(weight * kwPerWeight, 1);
    return {
      id: pole.id.replace('-', '-D'),
      node: pole.id,
      phases: pole.phases,
      kw,
      kvar: round(kw * dice.between(0.24, 0.4), 1),
      minimumKw: round(kw * dice.between(0.22, 0.36), 1),
    };
  });
}

/** A breaker at the head, reclosers where the plan has them, fuses on most laterals and on branch lanes. */
export function makeDevices({ plan, poles }: StrungCircuit, substation: SubstationPlan): Device[] {
  const dice = makeDice(plan.seed + 2);
  const shared = { end: 'from' as const, circuit: plan.code };
  let fuses = 0;
  return poles.flatMap((pole): Device[] => {
    const here = { branch: spanId(pole.id), ...shared };
    if (pole.parent === null) {
      return [
        {
          id: `${plan.code}-CB`,
          ...here,
          kind: 'breaker',
          ...substation.breaker,
          ...makeRelayCurves(substation.breaker, 'head'),
          voltageSupervised: true,
          directional: substation.directional,
          sectionalizing: true,
          deadTimeS: 2,
        },
      ];
    }
    if (pole.recloser !== null) {
      const { oldReclosers } = substation;
      const isOld = oldReclosers?.ids.includes(pole.recloser) ?? false;
      const rating = isOld ? { interruptingKa: oldReclosers?.interruptingKa } : {};
      const settings = { ...makeRelayCurves(substation.recloser, 'line'), voltageSupervised: !isOld };
      const recloser = {
        id: pole.recloser,
        ...here,
        kind: 'recloser',
        ...substation.recloser,
        ...rating,
        ...settings,
      };
      return [{ ...recloser, sectionalizing: true, deadTimeS: 2 }];
    }
    if (!pole.isHead || !dice.chance(0.85)) return [];
    fuses += 1;
    return [
      {
        id: `${plan.code}-F${String(fuses).padStart(2, '0')}`,
        ...here,
        kind: 'fuse',
        ...substation.fuse,
        phaseCurve: makeFuseCurve(pole.phases.length === 1 ? 40 : 65),
        sectionalizing: false,
      },
    ];
  });
}

/** The largest load beyond a pole, over all that is beyond it. */
function findLargestShare({ poles }: StrungCircuit, loads: readonly Load[], pole: number): number {
  const isBeyond = new Set<string>();
  poles.forEach(({ id, parent }, i) => {
    if (i === pole || (parent !== null && isBeyond.has(at(poles, parent).id))) isBeyond.add(id);
  });
  const beyond = loads.filter(({ node }) => isBeyond.has(node)).map(({ kw }) => kw);
  return beyond.length === 0 ? 0 : Math.max(...beyond) / beyond.reduce((sum, kw) => sum + kw, 0);
}

/** Sums of what hangs beyond each pole on its own circuit, itself included; parents always come before their children. */
function sumBeyond({ poles }: StrungCircuit, ofPole: ReadonlyMap<string, number>): number[] {
  const sums = poles.map((pole) => ofPole.get(pole.id) ?? 0);
  for (let i = poles.length - 1; i >= 0; i -= 1) {
    const { parent } = at(poles, i);
    if (parent !== null) sums[parent] = at(sums, parent) + at(sums, i);
  }
  return sums;
}

/**
 * All that lies beyond each breaker and recloser, the tie between the two Pellam Cross feeders counted as open.
 * Daytime minima are a little higher than the night's, and lower for the longer tracking window than for fixed panels.
 */
export function makeSections(
  strung: StrungCircuit,
  devices: readonly Device[],
  loads: readonly Load[],
): Section[] {
  const peaks = sumBeyond(strung, new Map(loads.map((load) => [load.node, load.kw])));
  const minima = sumBeyond(strung, new Map(loads.map((load) => [load.node, load.minimumKw ?? 0])));
  const indexOfSpan = new Map(strung.poles.map((pole, i) => [spanId(pole.id), i]));
  return devices
    .filter((device) => device.sectionalizing === true)
    .map((device) => {
      const i = indexOfSpan.get(device.branch) ?? 0;
      const minimumKw = at(minima, i);
      return {
        id: `beyond-${device.id}`,
        device: device.id,
        peakKw: Math.round(at(peaks, i)),
        minimumKw: Math.round(minimumKw),
        daytimeFixedKw: Math.round(minimumKw * 1.42),
        daytimeTrackingKw: Math.round(minimumKw * 1.25),
        minimumIs: 'gross',
        groundedLoadShare: 0.9,
        largestCustomerShare: round(findLargestShare(strung, loads, i), 3),
        uniform: true,
        transfers: false,
      };
    });
}
