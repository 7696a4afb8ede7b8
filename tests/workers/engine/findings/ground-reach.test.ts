import { describe, expect, it } from 'vitest';
import { listFaults } from '../../../support/recompute-step.ts';
import { answersTo, handStudy, phaseVolts } from './reach-studies.ts';

const answers = (...args: Parameters<typeof answersTo> extends [unknown, ...infer R] ? R : never) =>
  answersTo('ground-reach', ...args);

describe('Ground reach', () => {
  it('is 3I0 in the device at the end of its zone over the pickup, from the weakest source with the ground source in', () => {
    const [bolted, resistive, fall] = answers(handStudy());
    // Z0 = (2 + 3)∥5 + 3 = 5.5 and Z1 = 4 at `end`; half of I0 goes through the breaker. Without the project Z0 = 8.
    const through = (ohm: number) => (3 * phaseVolts) / Math.hypot(13.5, 3 * ohm) / 2;
    expect(bolted).toMatchObject({
      element: 'CB to end, bolted',
      verdict: 'within',
      limit: 2,
      comparison: '>=',
    });
    expect(bolted!.value).toBeCloseTo(through(0) / 100, 6);
    expect(bolted!.before).toBeCloseTo((3 * phaseVolts) / 16 / 100, 6);
    expect(resistive).toMatchObject({ element: 'CB to end, through 20 ohm', verdict: 'within', limit: 1 });
    expect(resistive!.value).toBeCloseTo(through(20) / 100, 6);
    // Bolted 1 − (3/27)/(3/16) = 40.7 %; through 20 ohm the total hardly changes and half of it goes elsewhere: more.
    const before = (3 * phaseVolts) / Math.hypot(16, 60);
    expect(fall).toMatchObject({
      verdict: 'outside',
      unit: '%',
      limit: 10,
      comparison: '<=',
      consequence: 'study',
    });
    expect(fall!.element).toBe('CB to end, fall of 3I0, through 20 ohm');
    expect(fall!.value).toBeCloseTo((1 - through(20) / before) * 100, 6);
  });

  it('gives 0, and steps that repeat it, for what rounding leaves of nothing', () => {
    // Behind a delta nothing but the project is earthed, so no 3I0 comes through the breaker.
    const study = handStudy(({ feeder, project }) => {
      feeder.nodes.push({ id: 'grid', kv: 115, phases: 'ABC' });
      feeder.sources![0]!.node = 'grid';
      const size = { kva: 10_000, connection: 'YNd1' as const, impedancePercent: 8, xr: 10 };
      feeder.transformers = [{ ...size, id: 'sub', from: 'grid', to: 'bus' }];
      project!.groundingBanks![0]!.z0 = { r: 0.2, x: 3 };
    });
    for (const { value, working, verdict } of answers(study)) {
      expect(value).toBe(0);
      expect(verdict).toBe('outside');
      expect(listFaults(working!)).toEqual([]);
      expect(working!.at(-1)!.result.value).toBe(0);
    }
  });

  it('says that the fault draws more while the relay sees less', () => {
    const study = handStudy(({ minimumFaultOhm: _, ...rest }) => rest);
    const fall = answers(study).at(-1)!;
    expect(fall.note).toMatch(
      /3I0 in CB goes from [\d.]+ A to [\d.]+ A, while the current of the fault itself rises/,
    );
    const machine = handStudy((changed) => {
      changed.minimumFaultOhm = 0;
      changed.project!.groundingBanks = [];
      changed.project!.machines = [
        { id: 'g', node: 'mid', kind: 'synchronous', kva: 2000, xSubtransientPu: 0.2, neutral: 'ungrounded' },
      ];
    });
    // An ungrounded machine props the positive sequence up: both the fault and the relay then draw more 3I0.
    expect(answers(machine).at(-1)!.value).toBeLessThanOrEqual(0);
  });

  it('passes exactly the limit where it is inclusive and not where it is strict', () => {
    const value = answers(handStudy())[0]!.value!;
    const at = (comparison: '>=' | '<') => [{ limit: value, comparison, consequence: 'study' }] as const;
    expect(answers(handStudy(), { limits: [...at('>=')] })[0]).toMatchObject({
      verdict: 'within',
      limit: value,
    });
    const fall = answers(handStudy()).at(-1)!.value!;
    const parameters = (largestFallPercent: number) => ({
      parameters: { resistiveMultiple: 1, largestFallPercent },
    });
    expect(answers(handStudy(), parameters(fall)).at(-1)!.verdict).toBe('within');
    expect(answers(handStudy(), parameters(fall * (1 - 1e-12))).at(-1)!.verdict).toBe('outside');
  });

  it('is outside where the pickup is too high, and needs data where it is not known', () => {
    const high = handStudy(({ feeder }) => (feeder.devices![0]!.groundPickupA = 500));
    expect(answers(high).map(({ verdict }) => verdict)).toEqual(['outside', 'outside', 'outside']);
    const unknown = handStudy(({ feeder }) => delete feeder.devices![0]!.groundPickupA);
    expect(answers(unknown)).toMatchObject([{ verdict: 'needs-data', element: 'CB', value: null }]);
  });

  it('needs data where a source gives no zero sequence, at its weakest too, and where no device is known', () => {
    const noZ0 = handStudy(({ feeder }) => delete feeder.sources![0]!.max.z0);
    const noWeakZ0 = handStudy(({ feeder }) => delete feeder.sources![0]!.min!.z0);
    const noDevice = handStudy(({ feeder }) => (feeder.devices = []));
    for (const study of [noZ0, noWeakZ0, noDevice]) {
      expect(answers(study)).toMatchObject([{ verdict: 'needs-data' }]);
    }
  });

  it('does not apply where nothing is earthed', () => {
    const study = handStudy(({ feeder, project }) => {
      feeder.nodes.push({ id: 'grid', kv: 69, phases: 'ABC' });
      feeder.sources![0]!.node = 'grid';
      feeder.transformers = [
        { id: 'sub', from: 'grid', to: 'bus', kva: 10000, connection: 'YNd1', impedancePercent: 8, xr: 20 },
      ];
      project!.groundingBanks = [];
    });
    expect(answers(study)).toMatchObject([{ verdict: 'not-applicable' }]);
  });

  it('ends a zone at the next automatic device, and asks that one too', () => {
    const study = handStudy(({ feeder }) => {
      feeder.devices!.push({ id: 'RC', branch: 'l2', end: 'from', kind: 'recloser', groundPickupA: 50 });
    });
    // The recloser is beyond the project: nothing lowers what it sees, and the breaker's zone ends where it stands.
    expect(answers(study)[0]!.element).toBe('CB to mid, bolted');
    const beyond = handStudy(({ feeder, project }) => {
      feeder.devices!.push({ id: 'RC', branch: 'l2', end: 'from', kind: 'recloser', groundPickupA: 300 });
      project!.node = 'end';
    });
    expect(answers(beyond)[0]!.element).toBe('RC to end, bolted');
  });

  it('ends a zone at the other end of its own line where a second device stands there', () => {
    const study = handStudy(({ feeder }) => {
      feeder.devices!.push({ id: 'RC', branch: 'l1', end: 'to', kind: 'recloser', groundPickupA: 300 });
    });
    expect(answers(study)[0]!.element).toBe('RC to end, bolted');
    study.feeder.devices![1]!.groundPickupA = 1;
    expect(answers(study)[0]!.element).toBe('CB to mid, bolted');
  });

  it('lets fuses end a zone only where the rule says so', () => {
    const study = handStudy(({ feeder }) => {
      feeder.devices!.push({ id: 'F', branch: 'l2', end: 'from', kind: 'fuse' });
    });
    expect(answers(study)[0]!.element).toBe('CB to end, bolted');
    expect(answers(study, { parameters: { fusesBoundZones: true } })[0]!.element).toBe('CB to mid, bolted');
  });

  it('follows laterals to their ends', () => {
    const study = handStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'tail', kv: 12.47, phases: 'B' });
      const z = { z1: { r: 0, x: 1 }, z0: { r: 0, x: 4 } };
      feeder.lines!.push({ id: 'lat', from: 'end', to: 'tail', phases: 'B', km: 1, ...z });
    });
    const [bolted] = answers(study);
    // Self impedance (4 + 2·1)/3 = 2 on top of (5.5 + 4 + 4)/3.
    expect(bolted!.element).toBe('CB to tail, bolted');
    expect(bolted!.value).toBeCloseTo(phaseVolts / (13.5 / 3 + 2) / 2 / 100, 6);
  });

  it('has limits by class of voltage', () => {
    const parameters = {
      multipleAbove5Kv: 7,
      multipleAbove15Kv: 9,
      resistiveMultiple: 1,
      resistiveMultipleAbove34Kv: 5,
    };
    expect(answers(handStudy(), { parameters }).map(({ limit }) => limit)).toEqual([7, 1]);
    // Above is above: at exactly that voltage the class below counts.
    const atClass = { multipleAbove12: 3, 'multipleAbove12.47Kv': 4, resistiveMultiple: 1 };
    expect(answers(handStudy(), { parameters: atClass }).map(({ limit }) => limit)).toEqual([2, 1]);
  });

  it('takes the machines of others out and in, and names what decides', () => {
    const study = handStudy(({ feeder, project }) => {
      project!.groundingBanks = [];
      feeder.machines = [
        {
          id: 'other',
          node: 'mid',
          kind: 'synchronous',
          kva: 5000,
          xSubtransientPu: 0.2,
          x0Pu: 0.05,
          neutral: 'solid',
        },
      ];
    });
    const [bolted] = answers(study);
    expect(bolted!.note).toContain('all machines in');
    const upstream = handStudy(({ feeder, project }) => {
      project!.groundingBanks = [];
      feeder.machines = [
        {
          id: 'other',
          node: 'bus',
          kind: 'synchronous',
          kva: 5000,
          xSubtransientPu: 0.2,
          x0Pu: 0.05,
          neutral: 'solid',
        },
      ];
    });
    expect(answers(upstream)[0]!.note).toContain('all machines out');
  });

  it('finds the scenario that is worse', () => {
    const study = handStudy(({ feeder }) => {
      feeder.groundingBanks = [{ id: 'spare', node: 'mid', z0: { r: 0, x: 2 } }];
      feeder.scenarios = [{ id: 'less', name: 'bank out', out: ['spare'] }];
    });
    expect(answers(study)[0]!.note).toContain('the model as it stands decides');
    const other = handStudy(({ feeder }) => {
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'twin' });
      feeder.scenarios = [{ id: 'long', out: ['twin'] }];
    });
    expect(answers(other)[0]!.note).toMatch(/decides/);
  });

  it('shows working that its printed numbers repeat', () => {
    const study = handStudy(({ feeder }) => {
      feeder.inverters = [{ id: 'one', node: 'end', phases: 'A', kva: 300, faultCurrentPu: 1.2 }];
    });
    const found = answers(study);
    expect(found).toHaveLength(3);
    for (const { working, value } of found) {
      expect(listFaults(working!)).toEqual([]);
      expect(working!.at(-1)!.result.value).toBeCloseTo(value!, 9);
    }
  });
});
