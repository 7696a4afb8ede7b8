import type { EquipmentKind } from '../../../shared/schemas/equipment.ts';
import { isMachineKind } from './equipment-words.ts';

interface NameplateField {
  key: string;
  label: string;
  unit?: string;
  hint?: string;
  optional?: boolean;
}

const rated: NameplateField[] = [
  { key: 'kva', label: 'Rated apparent power, in kVA', unit: 'kVA' },
  { key: 'kw', label: 'Rated power, in kW', unit: 'kW' },
  { key: 'kv', label: 'Rated voltage, in kV', unit: 'kV', hint: 'Line to line' },
];

const inverter: NameplateField[] = [
  ...rated,
  { key: 'faultCurrentPu', label: 'Fault current, times rated', unit: '×', hint: 'Commonly 1.1 to 1.2' },
  {
    key: 'trdPercent',
    label: 'Total rated-current distortion, in percent',
    unit: '%',
    hint: 'From the equipment sheet',
    optional: true,
  },
  {
    key: 'loadRejectionPercent',
    label: 'Highest voltage when the load is cut off, in percent',
    unit: '%',
    hint: 'From the load-rejection test, of nominal',
    optional: true,
  },
];

const machine: NameplateField[] = [
  ...rated,
  { key: 'xSubtransientPu', label: 'Subtransient reactance X″d, in per unit', unit: 'pu', hint: 'Saturated' },
  { key: 'x2Pu', label: 'Negative-sequence reactance X2, in per unit', unit: 'pu' },
  { key: 'x0Pu', label: 'Zero-sequence reactance X0, in per unit', unit: 'pu' },
  { key: 'rPu', label: 'Resistance, in per unit', unit: 'pu' },
];

const transformer: NameplateField[] = [
  { key: 'kva', label: 'Rating, in kVA', unit: 'kVA' },
  { key: 'kvHigh', label: 'Utility-side voltage, in kV', unit: 'kV' },
  { key: 'kvLow', label: 'Site-side voltage, in kV', unit: 'kV' },
  { key: 'impedancePercent', label: 'Impedance, in percent', unit: '%' },
  { key: 'xr', label: 'X/R ratio' },
  { key: 'zeroImpedancePercent', label: 'Zero-sequence impedance, in percent', unit: '%', optional: true },
];

/** The figures asked for one kind of equipment, in the order of a nameplate. */
export function nameplateFields(kind: EquipmentKind): readonly NameplateField[] {
  if (kind === 'transformer') return transformer;
  return isMachineKind(kind) ? machine : inverter;
}
