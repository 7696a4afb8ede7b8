import { describe, expect, it } from 'vitest';
import { composeProject, type ElectricalAnswers } from '../../../shared/rules/project-electrical.ts';
import type { CompleteAnswers } from '../../../shared/schemas/answers.ts';
import { biogasAnswers, rooftopAnswers, solarAnswers } from '../../support/fixture-answers.ts';
import { fixtureEquipment } from '../../support/fixture-equipment.ts';

const records = new Map(Object.entries(fixtureEquipment));
const poi = { node: 'n2', kv: 12.47, phases: 'ABC' };

const withRecords = ({ equipment, connection }: CompleteAnswers): ElectricalAnswers => ({
  equipment,
  connection,
  records,
});

describe('the project of a study file', () => {
  it('of two equal inverters behind a transformer has one inverter of twice the size', () => {
    const composed = composeProject('FX-1', withRecords(solarAnswers()), poi);
    expect(composed).toEqual({
      project: {
        id: 'FX-1',
        node: 'n2',
        nodes: [{ id: 'site-lv', kv: 0.48, phases: 'ABC' }],
        transformers: [
          {
            id: 'site-transformer',
            from: 'n2',
            to: 'site-lv',
            kva: 1500,
            connection: 'Dyn1',
            impedancePercent: 5.75,
            xr: 7,
            neutralTo: 'solid',
          },
        ],
        inverters: [
          {
            ...{ id: 'unit-1', node: 'site-lv', phases: 'ABC', kva: 1000, faultCurrentPu: 1.2, listed: true },
            energy: 'photovoltaic',
            listing: { standard: 'IEEE 1547', antiIslanding: true },
          },
        ],
      },
      sizeKw: 1000,
      exportKw: 1000,
      kind: 'pv-inverter',
    });
  });

  it('of a synchronous machine has its reactances, its neutral, and the transformer’s neutral reactor', () => {
    const { project, sizeKw, exportKw, kind } = composeProject('FX-2', withRecords(biogasAnswers()), poi);
    expect(project.machines).toEqual([
      {
        id: 'unit-1',
        node: 'site-lv',
        kind: 'synchronous',
        kva: 2500,
        rPu: 0.01,
        xSubtransientPu: 0.16,
        x2Pu: 0.17,
        x0Pu: 0.06,
        neutral: 'ungrounded',
        exportKw: 1500,
      },
    ]);
    expect(project.transformers).toMatchObject([{ connection: 'YNd1', neutralFrom: { r: 0, x: 5 } }]);
    expect(project.transformers?.[0]).not.toHaveProperty('neutralTo');
    expect({ sizeKw, exportKw, kind }).toEqual({ sizeKw: 2000, exportKw: 1500, kind: 'synchronous-machine' });
  });

  it('divides the impedance in the neutrals of N machines by N, because they are in parallel', () => {
    const answers = biogasAnswers();
    answers.equipment.units = [{ source: 'record', equipmentId: 'biogas', count: 4 }];
    answers.connection.machineNeutral = { kind: 'impedance', rOhm: 8, xOhm: 2 };
    const { project } = composeProject('FX-2', withRecords(answers), poi);
    expect(project.machines?.[0]).toMatchObject({ kva: 10_000, x0Pu: 0.06, neutral: { r: 2, x: 0.5 } });
  });

  it('takes a neutral impedance of nothing for a solid connection', () => {
    const answers = biogasAnswers();
    answers.connection.machineNeutral = { kind: 'impedance', rOhm: 0, xOhm: 0 };
    const { project } = composeProject('FX-2', withRecords(answers), poi);
    expect(project.machines?.[0]?.neutral).toBe('solid');
  });

  it('of an induction machine has the locked-rotor reactance and no neutral', () => {
    const answers = solarAnswers();
    answers.equipment.units = [{ source: 'record', equipmentId: 'turbine', count: 3 }];
    const { project } = composeProject('FX-3', withRecords(answers), poi);
    expect(project.machines).toEqual([
      {
        id: 'unit-1',
        node: 'site-lv',
        kind: 'induction',
        kva: 990,
        rPu: 0.02,
        xSubtransientPu: 0.18,
        x2Pu: 0.18,
      },
    ]);
  });

  it('of a one-phase roof has its inverter on the first phase that the node has, and no transformer', () => {
    const lateral = { node: 'n4', kv: 12.47, phases: 'B' };
    const { project } = composeProject('FX-4', withRecords(rooftopAnswers()), lateral);
    expect(project).toEqual({
      id: 'FX-4',
      node: 'n4',
      inverters: [
        {
          ...{ id: 'unit-1', node: 'n4', phases: 'B', kva: 8, faultCurrentPu: 1.2, listed: true },
          ratedKv: 0.416,
          energy: 'photovoltaic',
          listing: { standard: 'IEEE 1547', antiIslanding: true },
        },
      ],
    });
  });

  it('keeps ohms and amperes when a unit’s voltage differs from the site’s', () => {
    const answers = solarAnswers();
    const ratings = { kva: 100, kw: 100, kv: 0.5, rPu: 0.01, xSubtransientPu: 0.2, x2Pu: 0.2, x0Pu: 0.1 };
    const inverter = { kva: 100, kw: 100, kv: 0.5, faultCurrentPu: 1.2, listed: false };
    answers.equipment.units = [
      { source: 'nameplate', kind: 'synchronous-machine', nameplate: ratings, count: 1 },
      { source: 'nameplate', kind: 'battery-inverter', nameplate: inverter, count: 1 },
    ];
    const { project } = composeProject('FX-5', withRecords(answers), poi);
    const ohms = (0.2 * 0.5 ** 2) / 0.1;
    const machine = project.machines?.[0];
    expect(((machine?.xSubtransientPu ?? 0) * 0.48 ** 2) / 0.1).toBeCloseTo(ohms, 12);
    const amperes = (1.2 * 100) / (Math.sqrt(3) * 0.5);
    const bound = project.inverters?.[0];
    expect(((bound?.faultCurrentPu ?? 0) * 100) / (Math.sqrt(3) * 0.48)).toBeCloseTo(amperes, 10);
    expect(bound).toMatchObject({ id: 'unit-2', storage: true, listed: false });
  });

  it('shares an export limit among the units by their size, and says nothing where there is none', () => {
    const answers = solarAnswers();
    answers.equipment = {
      units: [
        { source: 'record', equipmentId: 'solar', count: 2 },
        { source: 'record', equipmentId: 'battery', count: 1 },
      ],
      exportKw: 500,
    };
    const { project, sizeKw } = composeProject('FX-6', withRecords(answers), poi);
    expect(sizeKw).toBe(1250);
    expect(project.inverters?.map(({ exportKw }) => exportKw)).toEqual([400, 100]);
  });
});
