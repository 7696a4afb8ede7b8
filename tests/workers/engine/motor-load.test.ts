import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Load, Study } from '../../../shared/schemas/study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy } from './cases.ts';

/*
 * Worked by hand: 12.47 kV, source j1 ohm: three-phase 12,470/√3/1 = 7199.6 A. A load of 800 kW and 600 kvar, half of
 * it motors of 0.2 per unit: 500 kVA, 0.2·12.47²/0.5 = 62.2004 ohms, 115.7 A more.
 */
function study(load: Partial<Load>, options?: Study['options']): Study {
  return {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    ...(options && { options }),
    feeder: {
      nodes: ['bus', 'far'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
      sources: [{ id: 's', node: 'bus', max: { z1: { r: 0, x: 1 }, z0: { r: 0, x: 4 } } }],
      lines: [
        { id: 'l', from: 'bus', to: 'far', phases: 'ABC', km: 1, z1: { r: 0, x: 1 }, z0: { r: 0, x: 3 } },
      ],
      loads: [{ id: 'mill', node: 'bus', phases: 'ABC', kw: 800, kvar: 600, ...load }],
      devices: [{ id: 'd', branch: 'l', end: 'from', kind: 'breaker', interruptingKa: 20 }],
    },
  };
}

const run = (load: Partial<Load>, options?: Study['options']) =>
  runStudy(checkedStudy(study(load, options)), proFormaRuleSet);

const motors = { motorFraction: 0.5, motorLockedRotorPu: 0.2 };
const source = 12_470 / Math.sqrt(3);

describe('Motors in the load', () => {
  it('add their locked-rotor current to the duty of devices where the study asks for it', () => {
    const { devices, nodes } = run(motors, { motorLoad: true });
    expect(devices.d!.before.availableA).toBeCloseTo(source * (1 + 1 / 62.20036), 2);
    expect(devices.d!.before.dutyA).toBeCloseTo(source * (1 + 1 / 62.20036), 2);
    expect(devices.d!.before.side).toBe('rest');
    // The currents that a study reports at its nodes outlast the first cycle.
    expect(nodes.bus!.before.threePhase).toBeCloseTo(source, 6);
  });

  it('count for nothing unless the study asks, and where no share is given', () => {
    const plain = JSON.stringify(run({}));
    expect(JSON.stringify(run(motors))).toBe(plain);
    expect(JSON.stringify(run(motors, { motorLoad: false }))).toBe(plain);
    expect(JSON.stringify(run({}, { motorLoad: true }))).toBe(plain);
  });

  it('give six times their current unless the locked-rotor reactance is given', () => {
    const { devices } = run({ motorFraction: 0.5 }, { motorLoad: true });
    const rated = 500 / (Math.sqrt(3) * 12.47);
    expect(devices.d!.before.availableA).toBeCloseTo(source + 6 * rated, 6);
  });

  it('leave nothing to a line-to-ground fault but what they do to the positive and negative sequence', () => {
    const without = run({}).devices.d!.before;
    const { devices } = run(motors, { motorLoad: true });
    expect(devices.d!.before.xrSeparate!).toBeLessThan(without.xrSeparate!);
  });

  it('come and go with the project that they belong to', () => {
    const withProject = study({});
    withProject.options = { motorLoad: true };
    withProject.project = {
      id: 'plant',
      node: 'bus',
      loads: [{ id: 'pumps', node: 'bus', phases: 'ABC', kw: 800, kvar: 600, ...motors }],
    };
    const { before, after } = runStudy(checkedStudy(withProject), proFormaRuleSet).devices.d!;
    expect(before.availableA).toBeCloseTo(source, 6);
    expect(after!.availableA).toBeCloseTo(source * (1 + 1 / 62.20036), 2);
  });

  it('are counted in the interrupting-duty finding', () => {
    const withProject = (motorLoad: boolean) => {
      const made = study(motors, { motorLoad });
      made.project = {
        id: 'roof',
        node: 'far',
        inverters: [{ id: 'i', node: 'far', phases: 'ABC', kva: 1, faultCurrentPu: 0 }],
      };
      const { findings } = runStudy(checkedStudy(made), proFormaRuleSet);
      return findings.find(({ id }) => id === 'interrupting-duty')!.note!;
    };
    expect(withProject(false)).toContain('7200 A available');
    expect(withProject(false)).not.toContain('Motors');
    expect(withProject(true)).toContain('7315 A available');
    expect(withProject(true)).toContain('Motors in the load are counted.');
  });

  it('are refused in a load without three phases, by place', () => {
    expect(() => run({ phases: 'AB', motorFraction: 0.3 })).toThrow('/feeder/loads/0/motorFraction');
  });
});
