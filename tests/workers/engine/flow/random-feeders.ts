import fc from 'fast-check';
import type { Inverter, Line, Load, Study, Transformer } from '../../../../shared/schemas/study.ts';
import type { Capacitor } from '../../../../shared/schemas/study-utility.ts';

/*
 * Random unbalanced feeders of 12.47 kV: a three-phase tree with laterals, loads of every kind between or on any phases,
 * capacitors, inverters and a transformer; sized so that a real feeder could carry them.
 */

const real = (min: number, max: number) => fc.double({ min, max, noNaN: true });
const impedance = (r: number, x: number) => fc.record({ r: real(r / 5, r), x: real(x / 5, x) });
const letters = ['A', 'B', 'C', 'AB', 'BC', 'CA', 'ABC'] as const;

const load = fc.record({
  at: fc.nat(),
  phases: fc.constantFrom(...letters),
  kw: real(1, 150),
  kvar: real(-30, 90),
  connection: fc.constantFrom('wye', 'delta') as fc.Arbitrary<'wye' | 'delta'>,
  model: fc.constantFrom('power', 'current', 'impedance') as fc.Arbitrary<NonNullable<Load['model']>>,
});
const inverter = fc.record({
  at: fc.nat(),
  phases: fc.constantFrom(...letters),
  kva: real(1, 300),
  powerFactor: fc.constantFrom(1, 0.9, -0.9),
});
const capacitor = fc.record({ at: fc.nat(), phases: fc.constantFrom(...letters), kvar: real(10, 300) });
const branch = fc.record({
  near: fc.nat(),
  km: real(0.1, 3),
  z1: impedance(0.6, 0.6),
  z0add: impedance(0.4, 1.2),
  phases: fc.constantFrom(...letters, 'ABC', 'ABC'),
});

export type FeederKinds = { connections: readonly string[]; ties: number };

export const randomFeeder = ({ connections, ties }: FeederKinds): fc.Arbitrary<Study> =>
  fc
    .record({
      branches: fc.array(branch, { minLength: 1, maxLength: 6 }),
      loads: fc.array(load, { minLength: 1, maxLength: 6 }),
      inverters: fc.array(inverter, { maxLength: 3 }),
      capacitors: fc.array(capacitor, { maxLength: 2 }),
      connection: fc.constantFrom(...connections),
      bankKva: real(1000, 5000),
      tieEnds: fc.array(fc.tuple(fc.nat(), fc.nat(), branch), { minLength: ties, maxLength: ties }),
      bank: fc.option(fc.record({ at: fc.nat(), z0: impedance(2, 20) })),
      volts: real(0.98, 1.05),
    })
    .map(({ branches, loads, inverters, capacitors, connection, bankKva, tieEnds, bank, volts }): Study => {
      const nodes = [
        { id: 'n0', kv: 12.47, phases: 'ABC' },
        { id: 'n1', kv: 12.47, phases: 'ABC' },
      ];
      const lines: Line[] = [];
      const addLine = (
        id: string,
        from: string,
        to: string,
        phases: string,
        given: (typeof branches)[number],
      ) => {
        const { km, z1, z0add } = given;
        lines.push({ id, from, to, phases, km, z1, z0: { r: z1.r + z0add.r, x: z1.x + z0add.x } });
      };
      addLine('l1', 'n0', 'n1', 'ABC', branches[0]!);
      branches.forEach((given) => {
        const near = nodes[given.near % nodes.length]!;
        const phases = [...given.phases].filter((letter) => near.phases.includes(letter)).join('');
        if (phases === '') return;
        const id = `n${nodes.length}`;
        nodes.push({ id, kv: 12.47, phases });
        addLine(`l${lines.length + 1}`, near.id, id, phases, given);
      });
      const core = nodes.filter(({ phases }) => phases === 'ABC');
      tieEnds.forEach(([p, q, given], index) => {
        const [from, to] = [core[p % core.length]!.id, core[q % core.length]!.id];
        if (from !== to) addLine(`t${index}`, from, to, 'ABC', given);
      });
      // Beyond the transformer: three-phase, and between phases alone where nothing there is earthed.
      nodes.push({ id: 'low', kv: 0.48, phases: 'ABC' });
      const isEarthed = connection.includes('yn');
      const on = <T extends { at: number; phases: string }>(given: T) => {
        const node = nodes[given.at % nodes.length]!;
        const phases =
          [...given.phases].filter((letter) => node.phases.includes(letter)).join('') || node.phases;
        return { node: node.id, phases: node.id === 'low' && !isEarthed ? 'ABC' : phases };
      };
      const transformer: Transformer = {
        id: 'bank',
        from: core[core.length - 1]!.id,
        to: 'low',
        kva: bankKva,
        connection,
        impedancePercent: 6,
        xr: 5,
      };
      return {
        format: 'feederwright.study/1',
        frequencyHz: 60,
        baseMva: 10,
        prefaultFactor: { max: 1.05, min: 0.95 },
        feeder: {
          nodes,
          lines,
          transformers: [transformer],
          sources: [
            {
              id: 's',
              node: 'n0',
              max: { z1: { r: 0.1, x: 1 }, z0: { r: 0.1, x: 1 } },
              peakVoltagePu: volts,
            },
          ],
          groundingBanks: bank ? [{ id: 'g', node: core[bank.at % core.length]!.id, z0: bank.z0 }] : [],
          loads: loads.map(({ at, kw, kvar, connection: tied, model, ...rest }, index): Load => {
            const place = on({ at, ...rest });
            const isDelta =
              place.phases.length > 1 && (tied === 'delta' || (place.node === 'low' && !isEarthed));
            return { id: `d${index}`, ...place, kw, kvar, model, connection: isDelta ? 'delta' : 'wye' };
          }),
          inverters: inverters.map(({ at, phases, ...rest }, index): Inverter => ({
            id: `v${index}`,
            ...on({ at, phases }),
            ...rest,
            faultCurrentPu: 1.2,
          })),
          capacitors: capacitors.flatMap(({ at, phases, kvar }, index): Capacitor[] => {
            const place = on({ at, phases });
            return place.node === 'low' ? [] : [{ id: `c${index}`, ...place, kvar }];
          }),
        },
      };
    });
