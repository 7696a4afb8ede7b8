import { expect, it } from 'vitest';
import { InverterNameplate, MachineNameplate, TransformerNameplate } from '../../shared/schemas/equipment.ts';
import { listProblems } from '../../server/validate.ts';

const inverter = { kva: 500, kw: 500, kv: 0.48, faultCurrentPu: 1.2, listed: true };
const machine = { kva: 330, kw: 300, kv: 0.48, rPu: 0.02, xSubtransientPu: 0.18, x2Pu: 0.18, x0Pu: 0.1 };
const transformer = { kva: 1500, kvHigh: 12.47, kvLow: 0.48, impedancePercent: 5.75, xr: 7 };

it.each([
  ['inverter', InverterNameplate, inverter, ['kva', 'kw', 'kv']],
  ['machine', MachineNameplate, machine, ['kva', 'kw', 'kv', 'xSubtransientPu', 'x2Pu', 'x0Pu']],
  ['transformer', TransformerNameplate, transformer, ['kva', 'kvHigh', 'kvLow']],
] as const)(
  'the nameplate of a %s takes no vanishing and no boundless size',
  (_, schema, ratings, fields) => {
    expect(listProblems(schema, ratings)).toEqual([]);
    for (const field of fields) {
      for (const absurd of [1e-300, 0.0099, 1e300, 0, -1]) {
        expect(listProblems(schema, { ...ratings, [field]: absurd }).map(({ path }) => path)).toEqual([
          field,
        ]);
      }
    }
  },
);

it('says from where to where a size may go', () => {
  expect(listProblems(TransformerNameplate, { ...transformer, kva: 0.5 })).toEqual([
    { path: 'kva', message: 'Enter the transformer rating in kilovolt-amperes, from 1 to 30,000' },
  ]);
  expect(listProblems(MachineNameplate, { ...machine, x0Pu: 0.001 })).toEqual([
    { path: 'x0Pu', message: 'Enter the zero-sequence reactance X0 in per unit, from 0.01 to 2' },
  ]);
});
