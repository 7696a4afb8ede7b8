import { expect, it } from 'vitest';
import type { TrialParts } from '../../../../shared/schemas/trials.ts';
import { listFields, listKinds, toChange } from '../../../../src/components/trials/change-fields.ts';

const parts: TrialParts = {
  project: { kva: 2500, exportKw: null },
  transformers: [{ id: 'step-up', kva: 3000, connection: 'YNd1', impedancePercent: 6 }],
  machines: [{ id: 'machine', kind: 'synchronous', kva: 2500 }],
  inverters: [],
  banks: [],
  nodes: [{ id: 'n2', kv: 12.47 }],
  devices: [],
};

it('offers only what the study has something for', () => {
  expect(listKinds(parts)).toEqual([
    ...['size', 'export-limit', 'power-factor', 'transformer', 'machine-neutral', 'add-bank'],
  ]);
});

it('asks for the fields of the chosen kind, with the names of the study to choose from', () => {
  const [where, ...rest] = listFields('add-bank', parts);
  expect(where).toMatchObject({ key: 'node', options: [{ value: 'n2' }] });
  expect(rest.map(({ key }) => key)).toEqual(['rOhm', 'xOhm']);
});

it('makes the change that is sent: what was left empty is left out', () => {
  expect(
    toChange('transformer', { element: 'step-up', impedancePercent: 8, kva: undefined, rOhm: 3 }),
  ).toEqual({ kind: 'transformer', element: 'step-up', impedancePercent: 8 });
  expect(toChange('machine-neutral', { element: 'machine', neutral: 'impedance', xOhm: 2 })).toEqual({
    kind: 'machine-neutral',
    element: 'machine',
    neutral: { kind: 'impedance', rOhm: 0, xOhm: 2 },
  });
  expect(toChange('power-factor', { powerFactor: 0.95, absorbs: 'no' })).toEqual({
    ...{ kind: 'power-factor', powerFactor: 0.95, absorbs: false },
  });
});
