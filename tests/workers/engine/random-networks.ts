import fc from 'fast-check';
import type { Line, Study } from '../../../shared/schemas/study.ts';

/* Random networks of one voltage: a tree with ties, one or two sources, machines and inverters. */

const ohms = (low: number, high: number) => fc.double({ min: low, max: high, noNaN: true });
const impedance = fc.record({ r: ohms(0.01, 1), x: ohms(0.1, 2) });

const line = (index: number) =>
  fc.record({ near: fc.nat(), far: fc.nat(), km: ohms(0.05, 5), z1: impedance, z0: impedance }).map(
    ({ near, far, ...rest }) =>
      ({
        makeBetween: (from: string, to: string): Line => ({
          id: `l${index}`,
          from,
          to,
          phases: 'ABC',
          ...rest,
        }),
        near,
        far,
      }) as const,
  );

export const randomNetwork: fc.Arbitrary<Study> = fc
  .integer({ min: 2, max: 12 })
  .chain((count) =>
    fc.record({
      branches: fc.tuple(...Array.from({ length: count - 1 }, (_, index) => line(index + 1))),
      ties: fc.array(line(0), { maxLength: 4 }),
      sources: fc.array(fc.record({ at: fc.nat(), z1: impedance, z0: impedance }), {
        minLength: 1,
        maxLength: 2,
      }),
      machines: fc.array(
        fc.record({
          at: fc.nat(),
          kva: ohms(100, 5000),
          x: ohms(0.1, 0.3),
          x0: ohms(0.02, 0.2),
          solid: fc.boolean(),
        }),
        { maxLength: 3 },
      ),
      inverters: fc.array(fc.record({ at: fc.nat(), kva: ohms(10, 2000) }), { maxLength: 3 }),
    }),
  )
  .map(({ branches, ties, sources, machines, inverters }): Study => {
    const count = branches.length + 1;
    const name = (at: number) => `n${at % count}`;
    const tree = branches.map(({ makeBetween, near }, index) =>
      makeBetween(name(near % (index + 1)), name(index + 1)),
    );
    const loops = ties.flatMap(({ makeBetween, near, far }, index) =>
      near % count === far % count ? [] : [{ ...makeBetween(name(near), name(far)), id: `t${index}` }],
    );
    return {
      format: 'feederwright.study/1',
      frequencyHz: 60,
      baseMva: 10,
      prefaultFactor: { max: 1.05, min: 0.95 },
      feeder: {
        nodes: Array.from({ length: count }, (_, at) => ({ id: name(at), kv: 12.47, phases: 'ABC' })),
        lines: [...tree, ...loops],
        sources: sources.map(({ at, ...max }, index) => ({ id: `s${index}`, node: name(at), max })),
        machines: machines.map(({ at, kva, x, x0, solid }, index) => ({
          id: `m${index}`,
          node: name(at),
          kind: 'synchronous',
          kva,
          xSubtransientPu: x,
          x0Pu: x0,
          neutral: solid ? 'solid' : 'ungrounded',
        })),
        inverters: inverters.map(({ at, kva }, index) => ({
          id: `v${index}`,
          node: name(at),
          phases: 'ABC',
          kva,
          faultCurrentPu: 1.2,
        })),
      },
    };
  });
