import { describe, expect, it } from 'vitest';
import { listConnectionProblems, listEquipmentProblems } from '../../../shared/rules/project-checks.ts';
import type { CompleteAnswers } from '../../../shared/schemas/answers.ts';
import { biogasAnswers, rooftopAnswers, solarAnswers } from '../../support/fixture-answers.ts';
import { fixtureEquipment } from '../../support/fixture-equipment.ts';

const records = new Map(Object.entries(fixtureEquipment));
const poi = { node: 'n2', kv: 12.47, phases: 'ABC' };

const onUnits = ({ equipment }: CompleteAnswers) => listEquipmentProblems({ equipment, records });
const onConnection = ({ equipment, connection }: CompleteAnswers, at: typeof poi | undefined = poi) =>
  listConnectionProblems({ equipment, connection, records }, at);

const typedTransformer = { kva: 1500, kvHigh: 12.47, kvLow: 0.48, impedancePercent: 5.75, xr: 7 };
function solarBehind(changes: Partial<typeof typedTransformer>): CompleteAnswers {
  const answers = solarAnswers();
  const rating = { source: 'nameplate' as const, nameplate: { ...typedTransformer, ...changes } };
  answers.connection.transformer = { ...answers.connection.transformer!, rating };
  return answers;
}

describe('what must be true of units', () => {
  it('finds nothing wrong with projects that can be computed', () => {
    for (const answers of [solarAnswers(), biogasAnswers(), rooftopAnswers()]) {
      expect([...onUnits(answers), ...onConnection(answers)]).toEqual([]);
    }
  });

  it('refuses more power than apparent power, at the field where it was typed', () => {
    const answers = solarAnswers();
    const nameplate = { kva: 500, kw: 510, kv: 0.48, faultCurrentPu: 1.2, listed: true };
    answers.equipment.units = [{ source: 'nameplate', kind: 'pv-inverter', nameplate, count: 1 }];
    const message = 'Rated power must not be more than rated apparent power: got 510 kW and 500 kVA';
    expect(onUnits(answers)).toEqual([{ path: 'units.0.nameplate.kw', message }]);
  });

  it('refuses a record that is gone, a transformer among the units, and an export limit above their size', () => {
    const answers = solarAnswers();
    answers.equipment.units = [
      { source: 'record', equipmentId: 'nothing', count: 1 },
      { source: 'record', equipmentId: 'lowTransformer', count: 1 },
    ];
    expect(onUnits(answers).map(({ path }) => path)).toEqual(['units.0.equipmentId', 'units.1.equipmentId']);
    const limited = { ...solarAnswers(), equipment: { ...solarAnswers().equipment, exportKw: 1001 } };
    const message =
      'Export limit must not be more than all units together: got 1001 kW, the units make 1000 kW';
    expect(onUnits(limited)).toEqual([{ path: 'exportKw', message }]);
  });
});

describe('what must be true of a connection', () => {
  it('takes a utility-side voltage within 5 % of the feeder’s and refuses one beyond', () => {
    expect(onConnection(solarBehind({ kvHigh: 12.47 * 1.05 }))).toEqual([]);
    const path = 'transformer.rating.nameplate.kvHigh';
    const message = 'Utility-side voltage must be within 5 % of the feeder’s: got 13.2 kV, expected 12.47 kV';
    expect(onConnection(solarBehind({ kvHigh: 13.2 }))).toEqual([{ path, message }]);
  });

  it('takes a site-side voltage within 10 % of the units’ and refuses one beyond', () => {
    expect(onConnection(solarBehind({ kvLow: 0.5 }))).toEqual([]);
    const path = 'transformer.rating.nameplate.kvLow';
    const message =
      'Site-side voltage must be within 10 % of the units’: got 0.6 kV, expected 0.48 kV for unit group 1';
    expect(onConnection(solarBehind({ kvLow: 0.6 }))).toEqual([{ path, message }]);
  });

  it('refuses a transformer below 80 % of the units’ kVA', () => {
    expect(onConnection(solarBehind({ kva: 800 }))).toEqual([]);
    const [problem] = onConnection(solarBehind({ kva: 799 }));
    expect(problem?.path).toBe('transformer.rating.nameplate.kva');
    expect(problem?.message).toContain('got 799 kVA, expected 800 kVA or more');
  });

  it('points at the chosen record where the ratings come from one', () => {
    const answers = solarAnswers();
    const rating = { source: 'record' as const, equipmentId: 'mediumTransformer' };
    answers.connection.transformer = { ...answers.connection.transformer!, rating };
    expect(onConnection(answers).map(({ path }) => path)).toEqual(['transformer.rating.equipmentId']);
  });

  it('asks for units of the feeder’s own voltage where there is no transformer', () => {
    const answers = solarAnswers();
    delete answers.connection.transformer;
    const message =
      'Without a transformer the units must be rated for the feeder’s voltage: got 0.48 kV for unit group 1, expected 12.47 kV within 10 %';
    expect(onConnection(answers)).toEqual([{ path: 'transformer', message }]);
    const unknownPlace = { equipment: answers.equipment, connection: answers.connection, records };
    expect(listConnectionProblems(unknownPlace, undefined)).toEqual([]);
  });

  it('asks how the neutral of a synchronous machine is grounded', () => {
    const answers = biogasAnswers();
    delete answers.connection.machineNeutral;
    expect(onConnection(answers).map(({ path }) => path)).toEqual(['machineNeutral']);
  });

  it('refuses machines, three-phase units and a transformer of its own on one phase', () => {
    const machine = { ...biogasAnswers(), connection: { phases: 'one' as const } };
    expect(onConnection(machine)).toEqual([
      { path: 'phases', message: 'Rotating machines need a three-phase connection' },
    ]);
    const solar = solarAnswers();
    solar.connection.phases = 'one';
    expect(onConnection(solar).map(({ path }) => path)).toEqual(['phases', 'transformer']);
  });

  it('takes a roof on one phase, and refuses a unit or a project that is too large for one', () => {
    const onePhase = (kva: number, count: number): CompleteAnswers => {
      const answers = rooftopAnswers();
      const nameplate = { kva, kw: kva, kv: 12.47, faultCurrentPu: 1.2, listed: true };
      answers.equipment.units = [{ source: 'nameplate', kind: 'pv-inverter', nameplate, count }];
      return answers;
    };
    expect(onConnection(onePhase(100, 2))).toEqual([]);
    const tooMany = 'A one-phase project may have 250 kVA at most: got 300 kVA from all units together';
    expect(onConnection(onePhase(100, 3))).toEqual([{ path: 'phases', message: tooMany }]);
    const tooLarge = 'A one-phase unit may have 100 kVA at most: got 101 kVA for unit group 1';
    expect(onConnection(onePhase(101, 1))).toEqual([{ path: 'phases', message: tooLarge }]);
  });

  it('refuses one-phase units in a three-phase project', () => {
    const answers = solarAnswers();
    answers.equipment.units = [{ source: 'record', equipmentId: 'rooftop', count: 30 }];
    const [problem] = onConnection(answers);
    expect(problem).toEqual({
      path: 'phases',
      message: 'Got a three-phase connection, but unit group 1 is one-phase',
    });
  });
});
