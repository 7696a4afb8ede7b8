import { describe, expect, it } from 'vitest';
import type { Study } from '../../../../shared/schemas/study.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { answersTo, handStudy, phaseVolts } from './reach-studies.ts';

const id = 'sympathetic-trip';

/** The project as a machine of j3 without a tie to earth, where the current back is that of its own impedance alone. */
function withMachine(change: (study: Study) => void = () => {}): Study {
  return handStudy((study) => {
    study.project!.groundingBanks = [];
    study.project!.machines = [
      {
        id: 'g',
        node: 'mid',
        kind: 'synchronous',
        kva: 15550.09,
        xSubtransientPu: 0.3,
        neutral: 'ungrounded',
      },
    ];
    change(study);
  });
}

describe('Sympathetic trip', () => {
  it('is the 3I0 that a ground source sends back through the breaker for a fault on the bus', () => {
    const [finding] = answersTo(id, handStudy());
    // Z0 = z∥8 at the bus behind the bank's j5 and the line's j3; a share of z/(z + 8) comes through the breaker.
    const back = (z: number) => ((3 * phaseVolts) / (2 * z + (z * 8) / (z + 8))) * (z / (z + 8));
    // Two lines to ground, I0 = V·Z2/(Z1·Z2 + Z0·(Z1 + Z2)), draw more into earth here than one.
    const z0 = (z: number) => (z * 8) / (z + 8);
    const backOfTwo = (z: number) => ((3 * phaseVolts * z) / (z * z + z0(z) * 2 * z)) * (z / (z + 8));
    expect(finding!.element).toBe('CB, ground');
    expect(finding!.value).toBeCloseTo(Math.max(back(1), back(2), backOfTwo(1), backOfTwo(2)) / 100, 6);
    expect(finding).toMatchObject({ verdict: 'outside', limit: 0.8, comparison: '<=', consequence: 'study' });
    expect(finding!.before).toBeCloseTo(0, 9);
    expect(finding!.note).toContain('bus');
  });

  it('says of phase and ground each where both are outside', () => {
    const both = withMachine(({ project }) => {
      project!.groundingBanks = [{ id: 'bank', node: 'mid', z0: { r: 0, x: 5 } }];
    });
    const found = answersTo(id, both);
    expect(found.map(({ element, verdict }) => [element, verdict])).toEqual([
      ['CB, ground', 'outside'],
      ['CB, phase', 'outside'],
    ]);
    expect(found[0]!.value).toBeGreaterThan(found[1]!.value!);
    for (const { working } of found) expect(listFaults(working!)).toEqual([]);
  });

  it('is the current in a phase that a machine sends back', () => {
    const [finding] = answersTo(
      id,
      withMachine(({ feeder }) => (feeder.devices![0]!.phasePickupA = 3000)),
    );
    expect(finding!.element).toBe('CB, phase');
    expect(finding!.value).toBeCloseTo(phaseVolts / (3 + 1) / 3000, 5);
    expect(finding!.verdict).toBe('within');
  });

  it('passes exactly the limit where it is inclusive and not where it is strict', () => {
    const value = answersTo(id, withMachine())[0]!.value!;
    const verdictAt = (comparison: '<=' | '<') =>
      answersTo(id, withMachine(), { limits: [{ limit: value, comparison, consequence: 'study' }] })[0]!
        .verdict;
    expect(verdictAt('<=')).toBe('within');
    expect(verdictAt('<')).toBe('outside');
  });

  it('cannot arise where the breaker trips for current out of the substation alone', () => {
    const study = withMachine(({ feeder }) => (feeder.devices![0]!.directional = true));
    expect(answersTo(id, study)).toMatchObject([
      { verdict: 'not-applicable', element: 'CB', consequence: 'none' },
    ]);
  });

  it('needs data where a pickup, the zero sequence of a source or the breaker is not known', () => {
    const noGround = withMachine(({ feeder }) => delete feeder.devices![0]!.groundPickupA);
    expect(answersTo(id, noGround)).toMatchObject([
      { element: 'CB, phase' },
      { element: 'CB', verdict: 'needs-data' },
    ]);
    const noZ0 = withMachine(({ feeder }) => delete feeder.sources![0]!.max.z0);
    expect(answersTo(id, noZ0).at(-1)).toMatchObject({ element: 'CB', verdict: 'needs-data' });
    const noDevice = withMachine(({ feeder }) => (feeder.devices = []));
    expect(answersTo(id, noDevice)).toMatchObject([{ verdict: 'needs-data' }]);
  });

  it("leaves the bank's breaker aside, which faults next door flow through anyway", () => {
    const study = withMachine(({ feeder }) => {
      feeder.nodes.push({ id: 'grid', kv: 124.7, phases: 'ABC' });
      feeder.sources![0]!.node = 'grid';
      feeder.transformers = [
        {
          id: 'sub',
          from: 'grid',
          to: 'bus',
          kva: 15550.09,
          connection: 'Dyn1',
          impedancePercent: 10,
          xr: 20,
        },
      ];
      feeder.devices!.unshift({
        id: 'main',
        branch: 'sub',
        end: 'to',
        kind: 'breaker',
        phasePickupA: 1,
        groundPickupA: 1,
      });
    });
    expect(answersTo(id, study)[0]!.element).toBe('CB, phase');
  });

  it('looks outwards on the feeders beside it where more comes back from there', () => {
    // A machine on the feeder beside holds the bus up for a fault at the bus no more than here, so the bus stays the worst.
    const study = withMachine();
    expect(answersTo(id, study)[0]!.note).toContain(' at bus,');
    // A series capacitor makes a fault beyond it draw more than one on the bus.
    const capacitor = withMachine(({ feeder }) => {
      feeder.lines![2]!.z1 = { r: 0, x: -0.5 };
      feeder.lines![2]!.z0 = { r: 0, x: -0.5 };
    });
    expect(answersTo(id, capacitor)[0]!.note).toContain(' at beside,');
  });

  it('shows working that its printed numbers repeat', () => {
    for (const study of [
      handStudy(),
      withMachine(),
      withMachine(({ project }) => {
        project!.inverters = [{ id: 'one', node: 'mid', phases: 'A', kva: 500, faultCurrentPu: 1.2 }];
      }),
    ]) {
      const [{ working, value }] = answersTo(id, study) as [Required<ReturnType<typeof answersTo>[number]>];
      expect(listFaults(working)).toEqual([]);
      expect(working.at(-1)!.result.value).toBeCloseTo(value!, 9);
    }
  });
});
