import { Type, type Static } from '@sinclair/typebox';
import { oneLine } from './text.ts';

export const generatorKinds = [
  'pv-inverter',
  'battery-inverter',
  'synchronous-machine',
  'induction-machine',
] as const;
export type GeneratorKind = (typeof generatorKinds)[number];
export const equipmentKinds = [...generatorKinds, 'transformer'] as const;
export type EquipmentKind = (typeof equipmentKinds)[number];

/*
 * Floors and ceilings hold what real equipment has with room to spare (common practice, no source): a size that no
 * equipment has is a slip of the pen, and one that is vanishing or boundless cannot be computed with.
 */

/** `what` as in "Enter the rated power in kilowatts". */
const between = (minimum: number, maximum: number, what: string) =>
  Type.Number({
    minimum,
    maximum,
    errorMessage: `Enter ${what}, from ${minimum} to ${maximum.toLocaleString('en')}`,
  });

/** Nameplate of an inverter: kVA and kW a unit, kV line to line (line to neutral times √3 for one-phase units). */
export const InverterNameplate = Type.Object(
  {
    kva: between(0.1, 20_000, 'the rated apparent power in kilovolt-amperes'),
    kw: between(0.1, 20_000, 'the rated power in kilowatts'),
    kv: between(0.1, 69, 'the rated voltage in kilovolts'),
    faultCurrentPu: Type.Number({
      minimum: 0.5,
      maximum: 4,
      errorMessage: 'Fault current must be between 0.5 and 4 times rated current',
    }),
    listed: Type.Boolean({ errorMessage: 'Say whether the inverter is listed to IEEE 1547' }),
    /** Abnormal operating performance category of IEEE 1547-2018. */
    category: Type.Optional(
      Type.Union([Type.Literal('I'), Type.Literal('II'), Type.Literal('III')], {
        errorMessage: 'Category must be I, II or III',
      }),
    ),
    /** Name of the settings profile that it is delivered with. */
    settingsProfile: Type.Optional(
      oneLine('Enter the name of the settings profile in 80 characters or fewer', 80),
    ),
    trdPercent: Type.Optional(
      Type.Number({
        minimum: 0,
        maximum: 100,
        errorMessage: 'Total rated-current distortion must be between 0 and 100 percent',
      }),
    ),
    loadRejectionPercent: Type.Optional(
      Type.Number({
        minimum: 100,
        maximum: 300,
        errorMessage: 'Highest voltage when the load is cut off must be between 100 and 300 percent',
      }),
    ),
  },
  { additionalProperties: false },
);
export type InverterNameplate = Static<typeof InverterNameplate>;

/** Nameplate of a rotating machine; reactances in per unit on kva and kv. */
export const MachineNameplate = Type.Object(
  {
    kva: between(0.1, 25_000, 'the rated apparent power in kilovolt-amperes'),
    kw: between(0.1, 20_000, 'the rated power in kilowatts'),
    kv: between(0.1, 69, 'the rated voltage in kilovolts'),
    rPu: Type.Number({ minimum: 0, maximum: 1, errorMessage: 'Resistance must be between 0 and 1 per unit' }),
    xSubtransientPu: between(0.01, 2, 'the saturated subtransient reactance X″d in per unit'),
    x2Pu: between(0.01, 2, 'the negative-sequence reactance X2 in per unit'),
    x0Pu: between(0.01, 2, 'the zero-sequence reactance X0 in per unit'),
  },
  { additionalProperties: false },
);
export type MachineNameplate = Static<typeof MachineNameplate>;

/** Nameplate of a two-winding transformer; kvHigh is the utility side. */
export const TransformerNameplate = Type.Object(
  {
    kva: between(1, 30_000, 'the transformer rating in kilovolt-amperes'),
    kvHigh: between(0.1, 69, 'the utility-side voltage in kilovolts'),
    kvLow: between(0.1, 69, 'the site-side voltage in kilovolts'),
    impedancePercent: Type.Number({
      minimum: 0.5,
      maximum: 30,
      errorMessage: 'Impedance must be between 0.5 and 30 percent',
    }),
    xr: Type.Number({ minimum: 0.1, maximum: 100, errorMessage: 'X/R must be between 0.1 and 100' }),
    zeroImpedancePercent: Type.Optional(
      Type.Number({
        minimum: 0.5,
        maximum: 60,
        errorMessage: 'Zero-sequence impedance must be between 0.5 and 60 percent',
      }),
    ),
  },
  { additionalProperties: false },
);
export type TransformerNameplate = Static<typeof TransformerNameplate>;

/** One released version of an equipment record, as it is listed and chosen. */
export interface EquipmentView {
  publicId: string;
  kind: EquipmentKind;
  maker: string;
  model: string;
  phases: 'three' | 'one';
  ratings: InverterNameplate | MachineNameplate | TransformerNameplate;
  certifiedUntil: string | null;
}
