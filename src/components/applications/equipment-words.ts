import { formatNumber } from '../../../shared/format.ts';
import type {
  EquipmentKind,
  EquipmentView,
  InverterNameplate,
  MachineNameplate,
  TransformerNameplate,
} from '../../../shared/schemas/equipment.ts';

type Ratings = EquipmentView['ratings'];

const isTransformer = (ratings: Ratings): ratings is TransformerNameplate => 'kvHigh' in ratings;
const isMachine = (ratings: Ratings): ratings is MachineNameplate => 'xSubtransientPu' in ratings;

const number = (value: number) =>
  formatNumber(value, Number.isInteger(value) ? 0 : Number.isInteger(value * 10) ? 1 : 2);

/** The ratings of a record or nameplate as rows for a reader, each with its unit. */
export function listRatings(ratings: Ratings): { term: string; value: string }[] {
  if (isTransformer(ratings)) {
    return [
      { term: 'Rating', value: `${number(ratings.kva)} kVA` },
      { term: 'Voltage', value: `${number(ratings.kvHigh)} / ${number(ratings.kvLow)} kV` },
      { term: 'Impedance', value: `${number(ratings.impedancePercent)} %, X/R ${number(ratings.xr)}` },
      ...(ratings.zeroImpedancePercent === undefined
        ? []
        : [{ term: 'Zero-sequence impedance', value: `${number(ratings.zeroImpedancePercent)} %` }]),
    ];
  }
  const common = [
    { term: 'Rating', value: `${number(ratings.kva)} kVA, ${number(ratings.kw)} kW` },
    { term: 'Voltage', value: `${number(ratings.kv)} kV` },
  ];
  if (isMachine(ratings)) {
    return [
      ...common,
      { term: 'Subtransient reactance X″d', value: `${formatNumber(ratings.xSubtransientPu, 3)} pu` },
      { term: 'Negative sequence X2', value: `${formatNumber(ratings.x2Pu, 3)} pu` },
      { term: 'Zero sequence X0', value: `${formatNumber(ratings.x0Pu, 3)} pu` },
      { term: 'Resistance', value: `${formatNumber(ratings.rPu, 3)} pu` },
    ];
  }
  return [
    ...common,
    {
      term: 'Fault current',
      value: `${formatNumber((ratings as InverterNameplate).faultCurrentPu, 2)} × rated`,
    },
    { term: 'Listed to IEEE 1547', value: (ratings as InverterNameplate).listed ? 'Yes' : 'No' },
  ];
}

/** "Tarn & Dowel SV-250, 250 kVA" for a choice list. */
export function nameRecord(record: EquipmentView): string {
  const kv = isTransformer(record.ratings)
    ? `${number(record.ratings.kvHigh)} / ${number(record.ratings.kvLow)} kV`
    : `${number(record.ratings.kv)} kV`;
  return `${record.maker} ${record.model}: ${number(record.ratings.kva)} kVA, ${kv}${record.phases === 'one' ? ', one-phase' : ''}`;
}

export const isMachineKind = (kind: EquipmentKind) =>
  kind === 'synchronous-machine' || kind === 'induction-machine';
