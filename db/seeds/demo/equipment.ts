import type {
  EquipmentKind,
  InverterNameplate,
  MachineNameplate,
  TransformerNameplate,
} from '../../../shared/schemas/equipment.ts';

export interface DemoEquipment {
  /** How the demo's applications name the record. */
  code: string;
  kind: EquipmentKind;
  maker: string;
  model: string;
  phases: 'three' | 'one';
  ratings: InverterNameplate | MachineNameplate | TransformerNameplate;
  certifiedUntil: string | null;
}

/** Voltage of a one-phase unit on 240 V, line to neutral times √3. */
const onePhaseKv = 0.416;

function inverter(
  code: string,
  kind: 'pv-inverter' | 'battery-inverter',
  [maker, model]: readonly [string, string],
  [kva, kv, faultCurrentPu]: readonly [number, number, number],
  certifiedUntil: string | null,
): DemoEquipment {
  return {
    code,
    kind,
    maker,
    model,
    phases: kv === onePhaseKv ? 'one' : 'three',
    ratings: {
      ...{ kva, kw: kva, kv, faultCurrentPu, listed: certifiedUntil !== null },
      ...(certifiedUntil === null
        ? { trdPercent: 4.1 }
        : {
            category: 'III' as const,
            settingsProfile: 'IEEE 1547-2018 defaults',
            trdPercent: kva < 20 ? 3.2 : 2.4,
            loadRejectionPercent: 119,
          }),
    },
    certifiedUntil,
  };
}

function machine(
  code: string,
  kind: 'synchronous-machine' | 'induction-machine',
  [maker, model]: readonly [string, string],
  ratings: MachineNameplate,
): DemoEquipment {
  return { code, kind, maker, model, phases: 'three', ratings, certifiedUntil: null };
}

function transformer(
  code: string,
  [maker, model]: readonly [string, string],
  [kva, kvHigh, kvLow, impedancePercent, xr, zeroImpedancePercent]: readonly number[],
): DemoEquipment {
  return {
    code,
    kind: 'transformer',
    maker,
    model,
    phases: 'three',
    ratings: {
      kva: kva!,
      kvHigh: kvHigh!,
      kvLow: kvLow!,
      impedancePercent: impedancePercent!,
      xr: xr!,
      zeroImpedancePercent: zeroImpedancePercent!,
    },
    certifiedUntil: null,
  };
}

/** Invented makers; ratings of the usual order for such equipment (common practice, no source). */
export function makeDemoEquipment(): DemoEquipment[] {
  return [
    inverter('halden-5', 'pv-inverter', ['Halden Sunworks', 'Roof 5'], [5, onePhaseKv, 1.1], '2029-06-30'),
    inverter(
      'halden-7',
      'pv-inverter',
      ['Halden Sunworks', 'Roof 7.6'],
      [7.6, onePhaseKv, 1.1],
      '2029-06-30',
    ),
    inverter(
      'halden-11',
      'pv-inverter',
      ['Halden Sunworks', 'Roof 11.4'],
      [11.4, onePhaseKv, 1.2],
      '2028-11-30',
    ),
    inverter('halden-36', 'pv-inverter', ['Halden Sunworks', 'Barn 36'], [36, 0.48, 1.1], '2029-03-31'),
    inverter('halden-60', 'pv-inverter', ['Halden Sunworks', 'Barn 60'], [60, 0.48, 1.1], '2029-03-31'),
    inverter('quern-125', 'pv-inverter', ['Quern Electric', 'Q-125'], [125, 0.48, 1.15], '2028-09-30'),
    inverter('quern-250', 'pv-inverter', ['Quern Electric', 'Q-250'], [250, 0.8, 1.15], '2029-12-31'),
    inverter(
      'quern-1000',
      'pv-inverter',
      ['Quern Electric', 'Q-1000 Field'],
      [1000, 0.63, 1.2],
      '2029-12-31',
    ),
    inverter('strand-500', 'pv-inverter', ['Strand & Oduya', 'Meadow 500'], [500, 0.63, 1.3], null),
    inverter(
      'calder-7',
      'battery-inverter',
      ['Calder Storage', 'Hearth 7'],
      [7.6, onePhaseKv, 1.2],
      '2029-02-28',
    ),
    inverter(
      'calder-100',
      'battery-inverter',
      ['Calder Storage', 'Yard 100'],
      [100, 0.48, 1.2],
      '2029-02-28',
    ),
    inverter('calder-500', 'battery-inverter', ['Calder Storage', 'Yard 500'], [500, 0.8, 1.5], '2028-07-31'),
    machine('bellweir-375', 'synchronous-machine', ['Bellweir Machines', 'BW 375'], {
      ...{ kva: 375, kw: 300, kv: 0.48, rPu: 0.016 },
      ...{ xSubtransientPu: 0.13, x2Pu: 0.15, x0Pu: 0.05 },
    }),
    machine('bellweir-1063', 'synchronous-machine', ['Bellweir Machines', 'BW 1063'], {
      ...{ kva: 1063, kw: 850, kv: 0.48, rPu: 0.012 },
      ...{ xSubtransientPu: 0.16, x2Pu: 0.18, x0Pu: 0.06 },
    }),
    machine('bellweir-2000', 'synchronous-machine', ['Bellweir Machines', 'BW 2000'], {
      ...{ kva: 2000, kw: 1600, kv: 0.48, rPu: 0.011 },
      ...{ xSubtransientPu: 0.14, x2Pu: 0.16, x0Pu: 0.05 },
    }),
    machine('torrance-2500', 'synchronous-machine', ['Torrance Turbine', 'Gas 2500'], {
      ...{ kva: 2500, kw: 2000, kv: 4.16, rPu: 0.01 },
      ...{ xSubtransientPu: 0.15, x2Pu: 0.17, x0Pu: 0.06 },
    }),
    machine('fallowmill-90', 'induction-machine', ['Fallowmill', 'Weir 90'], {
      ...{ kva: 90, kw: 75, kv: 0.48, rPu: 0.02 },
      ...{ xSubtransientPu: 0.19, x2Pu: 0.19, x0Pu: 0.19 },
    }),
    machine('fallowmill-250', 'induction-machine', ['Fallowmill', 'Weir 250'], {
      ...{ kva: 250, kw: 210, kv: 0.48, rPu: 0.018 },
      ...{ xSubtransientPu: 0.17, x2Pu: 0.17, x0Pu: 0.17 },
    }),
    transformer('tarrant-4-150', ['Tarrant Coil', 'P-150/4'], [150, 4.16, 0.48, 3.5, 3.5, 3.3]),
    transformer('tarrant-4-750', ['Tarrant Coil', 'P-750/4'], [750, 4.16, 0.48, 5.75, 6, 5.5]),
    transformer('tarrant-12-300', ['Tarrant Coil', 'P-300/12'], [300, 12.47, 0.48, 4.5, 4.5, 4.3]),
    transformer('tarrant-12-500', ['Tarrant Coil', 'P-500/12'], [500, 12.47, 0.48, 5, 5, 4.8]),
    transformer('tarrant-12-750', ['Tarrant Coil', 'P-750/12'], [750, 12.47, 0.8, 5.75, 5.8, 5.5]),
    transformer('tarrant-12-2500', ['Tarrant Coil', 'P-2500/12'], [2500, 12.47, 0.48, 5.75, 7.5, 5.5]),
    transformer('ivory-12-1500', ['Ivory & Brand', 'Field 1500/12'], [1500, 12.47, 0.63, 5.75, 7, 5.5]),
    transformer('ivory-12-3000', ['Ivory & Brand', 'Field 3000/12'], [3000, 12.47, 0.63, 6, 8, 5.8]),
    transformer('tarrant-25-300', ['Tarrant Coil', 'P-300/25'], [300, 24.9, 0.48, 4.5, 4.5, 4.3]),
    transformer('tarrant-25-500', ['Tarrant Coil', 'P-500/25'], [500, 24.9, 0.48, 5, 5, 4.8]),
    transformer('tarrant-25-750', ['Tarrant Coil', 'P-750/25'], [750, 24.9, 0.8, 5.75, 5.8, 5.5]),
    transformer('ivory-25-1250', ['Ivory & Brand', 'Field 1250/25'], [1250, 24.9, 0.63, 5.75, 7, 5.5]),
  ];
}
