import { createHash } from 'node:crypto';
import type { Database } from '../../db/connection.ts';
import { insertEquipmentVersion } from '../../db/repositories/equipment.ts';
import type { EquipmentView } from '../../shared/schemas/equipment.ts';

const inverter = { faultCurrentPu: 1.2, listed: true };

/** Made-up machines of made-up makers; the public id is the key, so that tests can name them. */
export const fixtureEquipment = {
  solar: {
    kind: 'pv-inverter',
    maker: 'Tidewright',
    model: 'TW 500',
    phases: 'three',
    ratings: { kva: 500, kw: 500, kv: 0.48, ...inverter },
  },
  rooftop: {
    kind: 'pv-inverter',
    maker: 'Tidewright',
    model: 'TW 8 home',
    phases: 'one',
    ratings: { kva: 8, kw: 7.6, kv: 0.416, ...inverter },
  },
  battery: {
    kind: 'battery-inverter',
    maker: 'Ollerby',
    model: 'Store 250',
    phases: 'three',
    ratings: { kva: 250, kw: 250, kv: 0.48, ...inverter },
  },
  biogas: {
    kind: 'synchronous-machine',
    maker: 'Quernmoor',
    model: 'Q2500',
    phases: 'three',
    ratings: { kva: 2500, kw: 2000, kv: 4.16, rPu: 0.01, xSubtransientPu: 0.16, x2Pu: 0.17, x0Pu: 0.06 },
  },
  turbine: {
    kind: 'induction-machine',
    maker: 'Quernmoor',
    model: 'A300',
    phases: 'three',
    ratings: { kva: 330, kw: 300, kv: 0.48, rPu: 0.02, xSubtransientPu: 0.18, x2Pu: 0.18, x0Pu: 0.1 },
  },
  mediumTransformer: {
    kind: 'transformer',
    maker: 'Harrowgate Winding',
    model: 'HW 3000/4',
    phases: 'three',
    ratings: { kva: 3000, kvHigh: 12.47, kvLow: 4.16, impedancePercent: 5.75, xr: 8 },
  },
  lowTransformer: {
    kind: 'transformer',
    maker: 'Harrowgate Winding',
    model: 'HW 1500/05',
    phases: 'three',
    ratings: { kva: 1500, kvHigh: 12.47, kvLow: 0.48, impedancePercent: 5.75, xr: 7 },
  },
} as const satisfies Record<string, Omit<EquipmentView, 'publicId' | 'certifiedUntil'>>;

export async function insertFixtureEquipment(db: Database): Promise<void> {
  for (const [index, [publicId, record]] of Object.entries(fixtureEquipment).entries()) {
    await insertEquipmentVersion(db, {
      ...record,
      publicId,
      equipmentId: index + 1,
      number: 1,
      sha256: createHash('sha256').update(JSON.stringify(record)).digest(),
      state: 'released',
      certifiedUntil: null,
    });
  }
}
