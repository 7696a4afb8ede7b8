import type {
  Device,
  ElementLists,
  Inverter,
  Load,
  Machine,
  Neutral,
  Node,
} from '../../../../shared/schemas/study.ts';
import type { Listing } from '../../../../shared/schemas/study-utility.ts';
import type { Draw } from './odd-draw.ts';
import { partsOf } from './odd-draw.ts';

/* Elements of odd studies: each optional field is there or not. */

/** Loads, generators, capacitors and banks at some nodes; ids begin with `mark`. */
export function makeElements(draw: Draw, nodes: readonly Node[], mark: string): ElementLists {
  const threePhase = nodes.filter(({ phases, kv }) => phases === 'ABC' && kv < 60);
  const low = nodes.filter(({ kv }) => kv < 60);
  const at = () => draw.pick(low);
  const some = <T>(most: number, make: (index: number) => T) => (low.length > 0 ? draw.many(most, make) : []);
  const whole = <T>(most: number, make: (index: number) => T) =>
    threePhase.length > 0 && draw.chance(0.5) ? draw.many(most, make) : [];
  return {
    loads: some(5, (index): Load => {
      const { id: node, phases: there } = at();
      const phases = draw.pick(partsOf[there]!);
      const kw = draw.pick([0, 5, 100, draw.between(1, 800)]);
      return {
        id: `${mark}-load-${index}`,
        node,
        phases,
        kw,
        kvar: draw.between(-20, 60),
        ...draw.some({ minimumKw: draw.pick([0, kw / 3, kw]) }, 0.8),
        ...draw.some({ connection: phases.length > 1 ? draw.pick(['wye', 'delta'] as const) : 'wye' }),
        ...draw.some({ model: draw.pick(['power', 'current', 'impedance'] as const) }),
      };
    }),
    inverters: some(3, (index): Inverter => {
      const { id: node, phases } = at();
      return {
        id: `${mark}-inverter-${index}`,
        node,
        phases: draw.chance(0.6) ? phases : draw.pick(partsOf[phases]!),
        kva: draw.pick([5, 50, 1000, draw.between(1, 4000)]),
        faultCurrentPu: draw.pick([0, 1.1, 1.2, 3]),
        ...makeGeneration(draw),
        ...draw.some({
          tracking: draw.truth(),
          listed: draw.truth(),
          energy: draw.pick(['photovoltaic', 'storage', 'wind', 'other'] as const),
        }),
        ...draw.some(
          {
            gridForming: draw.pick([
              'unknown',
              { z1: { r: 0.1, x: 2 } },
              { z1: { r: 0, x: 2 }, z0: { r: 0, x: 1 } },
            ]),
            voltVar: [
              [0.95, 0.44],
              [1, 0],
              [1.05, -0.44],
            ] as [number, number][],
          },
          0.15,
        ),
      };
    }),
    machines: whole(2, (index): Machine => {
      const isInduction = draw.chance(0.3);
      return {
        id: `${mark}-machine-${index}`,
        node: draw.pick(threePhase).id,
        kva: draw.pick([100, 2000, draw.between(50, 4000)]),
        xSubtransientPu: draw.between(0.1, 0.3),
        ...draw.some({ rPu: 0.01, x2Pu: 0.2 }),
        ...makeGeneration(draw),
        ...(isInduction
          ? { kind: 'induction' }
          : {
              kind: 'synchronous',
              x0Pu: 0.06,
              neutral: draw.pick<Neutral>(['solid', 'ungrounded', { r: 1, x: 0 }]),
            }),
      };
    }),
    groundingBanks: whole(1, (index) => ({
      id: `${mark}-grounding-${index}`,
      node: draw.pick(threePhase).id,
      z0: { r: draw.between(0, 2), x: draw.between(1, 40) },
    })),
    capacitors: some(2, (index) => {
      const { id: node, phases } = at();
      return {
        id: `${mark}-capacitor-${index}`,
        node,
        phases,
        kvar: draw.between(10, 600),
        ...draw.some({ switchedByVoltage: [0.98, 1.03] as [number, number] }),
      };
    }),
  };
}

function makeGeneration(draw: Draw): Pick<Inverter, 'exportKw' | 'powerFactor' | 'storage' | 'listing'> {
  const listing: Listing = draw.some({
    standard: draw.pick(['UL 1741', 'IEEE 1547', 'a note on a napkin']),
    category: draw.pick(['I', 'II', 'III'] as const),
    profile: 'area default',
    trdPercent: draw.pick([0, 3, 5, 7]),
    loadRejectionPercent: draw.pick([110, 130, 150]),
    antiIslanding: draw.truth(),
  });
  return draw.some(
    {
      exportKw: draw.pick([0, 20, 500]),
      powerFactor: draw.pick([1, 0.9, -0.9, 0]),
      storage: draw.truth(),
      listing,
    },
    0.4,
  );
}

export function makeDevice(draw: Draw, id: string, branches: readonly { id: string }[]): Device {
  const branch = branches.length > 0 ? draw.pick(branches).id : 'none';
  return {
    id,
    branch,
    end: draw.pick(['from', 'from', 'to']),
    kind: draw.pick(['breaker', 'recloser', 'recloser', 'fuse', 'sectionalizer', 'elbow', 'switch', 'relay']),
    ...draw.some({
      interruptingKa: draw.between(0.5, 20),
      phasePickupA: draw.between(20, 900),
      groundPickupA: draw.between(10, 300),
    }),
    ...draw.some(
      {
        testXr: draw.between(1, 20),
        ratingBasis: draw.pick(['symmetrical', 'asymmetrical']),
        sectionalizing: draw.truth(),
        deadTimeS: draw.pick([0, 0.5, 2, 5]),
        voltageSupervised: draw.truth(),
        directional: draw.truth(),
        ratedKv: draw.pick([4.76, 15, 38]),
        faultClosingKa: draw.between(1, 20),
      },
      0.35,
    ),
  };
}
