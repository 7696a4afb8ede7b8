import type { Device, Source, Transformer } from '../../../shared/schemas/study.ts';
import type { Point } from './plane.ts';

type Switchgear = Pick<Device, 'interruptingKa' | 'phasePickupA' | 'groundPickupA' | 'testXr' | 'ratedKv'>;

/** What one substation brings to its model; impedances of the source in ohms at its own voltage. */
export interface SubstationPlan {
  code: string;
  name: string;
  substation: string;
  place: Point;
  highKv: number;
  kv: number;
  source: Pick<Source, 'max' | 'min'>;
  bank: Pick<Transformer, 'kva' | 'impedancePercent' | 'xr'>;
  breaker: Switchgear;
  recloser: Switchgear;
  /** Reclosers of an earlier kind that are still in place. */
  oldReclosers?: { ids: readonly string[]; interruptingKa: number };
  fuse: Pick<Device, 'interruptingKa' | 'testXr' | 'ratedKv'>;
  /** Whether its breakers trip only for current that leaves the bus, as feeders that are tied together need. */
  directional: boolean;
  /** A relay that trips the bank when the high side floats; only there may power flow back. */
  guardsHighSide: boolean;
  /** Resistance of the fault that ground protection should still see, ohms. */
  minimumFaultOhm: number;
}

function behindTransmission(
  kv: number,
  maxMva: number,
  minMva: number,
  xr: number,
): Pick<Source, 'max' | 'min'> {
  const strength = (mva: number) => {
    const z = kv ** 2 / mva;
    const r = z / Math.hypot(1, xr);
    const round = (ohm: number) => Math.round(ohm * 1e4) / 1e4;
    return {
      z1: { r: round(r), x: round(r * xr) },
      z0: { r: round(1.9 * r), x: round(1.35 * r * xr) },
    };
  };
  return { max: strength(maxMva), min: strength(minMva) };
}

/**
 * Invented, of customary size. Interrupting ratings are from the usual series of such apparatus, test X/R 17 for breakers
 * and lower for reclosers and cut-outs: common practice, no source.
 */
export const substationPlans: readonly SubstationPlan[] = [
  {
    code: 'MB',
    name: 'Marrowbank Quay 4.16 kV',
    substation: 'Marrowbank Quay',
    place: [-0.66, -0.9],
    highKv: 69,
    kv: 4.16,
    source: behindTransmission(69, 700, 430, 9),
    bank: { kva: 5000, impedancePercent: 7, xr: 12 },
    breaker: { interruptingKa: 12.5, phasePickupA: 560, groundPickupA: 140, testXr: 17, ratedKv: 4.76 },
    recloser: { interruptingKa: 10, phasePickupA: 320, groundPickupA: 100, testXr: 12, ratedKv: 15.5 },
    fuse: { interruptingKa: 10, testXr: 10, ratedKv: 15 },
    directional: false,
    guardsHighSide: false,
    minimumFaultOhm: 8,
  },
  {
    code: 'PL',
    name: 'Pellam Cross 12.47 kV',
    substation: 'Pellam Cross',
    place: [4.16, 0.86],
    highKv: 115,
    kv: 12.47,
    source: behindTransmission(115, 1500, 900, 10),
    bank: { kva: 15_000, impedancePercent: 8.5, xr: 16 },
    breaker: { interruptingKa: 12.5, phasePickupA: 360, groundPickupA: 100, testXr: 17, ratedKv: 15 },
    recloser: { interruptingKa: 6, phasePickupA: 260, groundPickupA: 80, testXr: 12, ratedKv: 15.5 },
    oldReclosers: { ids: ['PL2-R1', 'PL2-R2'], interruptingKa: 4 },
    fuse: { interruptingKa: 10, testXr: 10, ratedKv: 15 },
    directional: true,
    guardsHighSide: true,
    minimumFaultOhm: 40,
  },
  {
    code: 'HC',
    name: 'High Corrie 24.9 kV',
    substation: 'High Corrie',
    place: [-6.2, 2.9],
    highKv: 115,
    kv: 24.9,
    source: behindTransmission(115, 1900, 1100, 11),
    bank: { kva: 25_000, impedancePercent: 8.5, xr: 18 },
    breaker: { interruptingKa: 12.5, phasePickupA: 400, groundPickupA: 160, testXr: 17, ratedKv: 27 },
    recloser: { interruptingKa: 8, phasePickupA: 240, groundPickupA: 90, testXr: 14, ratedKv: 27 },
    fuse: { interruptingKa: 10, testXr: 10, ratedKv: 27 },
    directional: true,
    guardsHighSide: true,
    minimumFaultOhm: 40,
  },
];
