import type { Inverter, Machine, Node, Transformer } from '../../../shared/schemas/study.ts';
import { at, toLngLat } from './plane.ts';
import { makeDice } from './random.ts';
import type { StrungCircuit } from './stringing.ts';

/** How many small plants already run on a circuit: three-phase roofs, and houses on one phase. */
const connectedRoofs: Readonly<Record<string, readonly [threePhase: readonly number[], houses: number]>> = {
  MB1: [[50, 36], 5],
  PL1: [[150, 100], 4],
  PL2: [[125], 3],
  HC1: [[60, 50], 4],
  HC2: [[250, 100], 3],
};

const usualListing = {
  standard: 'UL 1741',
  category: 'III' as const,
  profile: 'IEEE 1547-2018 defaults',
  trdPercent: 2.5,
  loadRejectionPercent: 118,
  antiIslanding: true,
};

/** Inverters in service, listed, giving 1.1 to 1.2 times their rated current into a fault. */
export function makeInverters({ plan, poles }: StrungCircuit): Inverter[] {
  const dice = makeDice(plan.seed + 3);
  const [roofs, houses] = connectedRoofs[plan.code] ?? [[], 0];
  const wide = poles.filter((pole) => pole.phases === 'ABC' && pole.parent !== null);
  const narrow = poles.filter((pole) => pole.phases.length === 1);
  const sizes = [
    ...roofs.map((kva) => ({ kva, pole: dice.pick(wide) })),
    ...Array.from({ length: houses }, () => ({
      kva: dice.pick([6, 7.6, 10, 11.4]),
      pole: dice.pick(narrow),
    })),
  ];
  return sizes.map(({ kva, pole }, i) => ({
    id: `${plan.code}-PV${i + 1}`,
    node: pole.id,
    phases: pole.phases,
    kva,
    faultCurrentPu: dice.pick([1.1, 1.2]),
    exportKw: kva,
    powerFactor: 1,
    tracking: false,
    storage: false,
    listed: true,
    energy: 'photovoltaic' as const,
    listing: { ...usualListing },
  }));
}

interface Plant {
  nodes: Node[];
  transformers: Transformer[];
  machines: Machine[];
}

/**
 * The biogas plant at Long Barrow: one synchronous machine behind a wye-delta transformer whose neutral is grounded
 * through a reactor, so that it holds the island's ground without drawing much of the feeder's.
 */
export function makeBiogasPlant(strung: StrungCircuit): Plant {
  const pole = at(strung.poles, strung.atJunction.get('Long Barrow') ?? -1);
  const terminals = 'HC2-BG';
  return {
    nodes: [
      {
        id: terminals,
        kv: 0.48,
        phases: 'ABC',
        position: toLngLat([pole.point[0] - 0.16, pole.point[1] + 0.06], 6),
      },
    ],
    transformers: [
      {
        id: 'HC2-BG-T',
        from: pole.id,
        to: terminals,
        kva: 1250,
        connection: 'YNd1',
        impedancePercent: 5.75,
        xr: 7,
        neutralFrom: { r: 1.5, x: 30 },
        circuit: strung.plan.code,
        with: 'HC2-BG-G',
      },
    ],
    machines: [
      {
        id: 'HC2-BG-G',
        node: terminals,
        kind: 'synchronous',
        kva: 1063,
        rPu: 0.012,
        xSubtransientPu: 0.16,
        x2Pu: 0.18,
        x0Pu: 0.06,
        neutral: 'ungrounded',
        exportKw: 800,
      },
    ],
  };
}
