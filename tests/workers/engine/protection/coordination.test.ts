import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { RuleSet } from '../../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../../shared/schemas/study.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { findCoordination } from '../../../../workers/engine/protection/coordination.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { handStudy, phaseVolts } from '../findings/reach-studies.ts';

/** The feeder of reach-studies.ts with a recloser on the second line and the project at its end. */
function coordinate(change: (study: Study) => void = () => {}) {
  const study = handStudy((made) => {
    made.project!.node = 'end';
    made.project!.groundingBanks![0]!.node = 'end';
    const [breaker] = made.feeder.devices!;
    breaker!.phaseCurve = { kind: 'ieee-very-inverse', pickupA: 400, timeDial: 2 };
    breaker!.groundCurve = { kind: 'iec-standard-inverse', pickupA: 100, timeDial: 0.3 };
    made.feeder.devices!.push({
      id: 'RC',
      branch: 'l2',
      end: 'from',
      kind: 'recloser',
      phasePickupA: 280,
      groundPickupA: 70,
      deadTimeS: 2,
      phaseCurve: { kind: 'ieee-extremely-inverse', pickupA: 280, timeDial: 1, instantaneousA: 2000 },
      groundCurve: { kind: 'definite-time', pickupA: 70, timeS: 0.4 },
    });
    change(made);
  });
  return findCoordination(makeScreening(study as ProjectStudy, proFormaRuleSet as RuleSet));
}

const veryInverse = (amps: number) => 2 * (19.61 / ((amps / 400) ** 2 - 1) + 0.491);
const standardInverse = (amps: number) => (0.3 * 0.14) / ((amps / 100) ** 0.02 - 1);

describe('Coordination on paper', () => {
  it('lists the devices from the source on, with their settings', () => {
    const { devices, caution } = coordinate();
    expect(devices.map(({ id, kv, deadTimeS, directional }) => [id, kv, deadTimeS, directional])).toEqual([
      ['CB', 12.47, null, null],
      ['RC', 12.47, 2, null],
    ]);
    expect(caution).toContain('responsibility of the protection engineer');
  });

  it('times each device at the near and far end of its zone by its own current', () => {
    const [breaker] = coordinate().devices;
    const near = breaker!.faults.find(({ element, end }) => element === 'phase' && end === 'near')!;
    // Just beyond the breaker with the strongest source, j1; nothing comes from beyond but earth current.
    expect(near).toMatchObject({ node: 'bus', fault: 'threePhase' });
    expect(near.before.amps).toBeCloseTo(phaseVolts, 6);
    expect(near.before.seconds).toBeCloseTo(veryInverse(phaseVolts), 9);
    const far = breaker!.faults.find(({ element, end }) => element === 'phase' && end === 'far')!;
    // Up to the recloser, line to line from the weakest source: √3·V/(2·(2 + 1)).
    expect(far).toMatchObject({ node: 'mid', fault: 'lineLine' });
    expect(far.before.amps).toBeCloseTo((Math.sqrt(3) * phaseVolts) / 6, 6);
    expect(far.after.seconds).toBeCloseTo(veryInverse((Math.sqrt(3) * phaseVolts) / 6), 9);
  });

  it('gives the margin of neighbours for one fault, before and after, and says what changes', () => {
    const { pairs, working } = coordinate();
    expect(pairs.map(({ first, backup, element, end }) => [first, backup, element, end])).toEqual([
      ['RC', 'CB', 'phase', 'near'],
      ['RC', 'CB', 'phase', 'far'],
      ['RC', 'CB', 'ground', 'near'],
      ['RC', 'CB', 'ground', 'far'],
    ]);
    const far = pairs.at(-1)!;
    // At `end` Z1 = 4: Z0 = 8 without the project, 8∥5 = 3.0769 with its bank there, of which 5/13 of I0 comes through.
    const before = (3 * phaseVolts) / 16;
    const after = ((3 * phaseVolts) / (8 + 40 / 13)) * (5 / 13);
    expect(far.before.backup.amps).toBeCloseTo(before, 6);
    expect(far.after.backup.amps).toBeCloseTo(after, 6);
    expect(far.before.marginS).toBeCloseTo(standardInverse(before) - 0.4, 9);
    expect(far.after.marginS).toBeCloseTo(standardInverse(after) - 0.4, 9);
    expect(far.words).toMatch(
      /^For a ground fault at the far end of the zone of RC \(end\) RC carries .* A instead of .* A/,
    );
    expect(far.words).toMatch(/the margin goes from [\d.]+ s to [\d.]+ s\.$/);
    expect(working.length).toBeGreaterThan(0);
    expect(listFaults(working)).toEqual([]);
  });

  it('does not let a fuse that backs up begin to melt', () => {
    const { pairs, working } = coordinate(({ feeder }) => {
      feeder.devices![0] = {
        id: 'CB',
        branch: 'l1',
        end: 'from',
        kind: 'fuse',
        phaseCurve: {
          kind: 'fuse',
          minimumMelt: [
            [100, 100],
            [10000, 0.01],
          ],
          totalClear: [
            [120, 100],
            [12000, 0.02],
          ],
        },
      };
    });
    const phase = pairs.find(({ element, end }) => element === 'phase' && end === 'far')!;
    const amps = (Math.sqrt(3) * phaseVolts) / 8;
    // On log–log paper the melting time falls by the square of the current here: 100 s · (100 A/I)².
    expect(phase.before.backup.seconds).toBeCloseTo(100 * (100 / amps) ** 2, 9);
    // A fault to ground melts it by the current in its phase, not by 3I0.
    const ground = pairs.find(({ element, end }) => element === 'ground' && end === 'far')!;
    expect(ground.before.backup.amps).toBeCloseTo((3 * phaseVolts) / 16, 6);
    expect(listFaults(working)).toEqual([]);
  });

  it('leaves times open where a curve is not known or its pickup not reached', () => {
    const { pairs, devices } = coordinate(({ feeder }) => {
      delete feeder.devices![0]!.groundCurve;
      feeder.devices![0]!.phaseCurve = { kind: 'iec-very-inverse', pickupA: 50_000, timeDial: 1 };
    });
    expect(pairs.every(({ after }) => after.marginS === null)).toBe(true);
    expect(pairs[0]!.words).toContain('CB carries');
    expect(pairs[0]!.words).toContain('the margin is not known');
    expect(devices[0]!.groundCurve).toBeNull();
  });

  it('gives curves to draw, by rising current, with the step of an instantaneous element upright', () => {
    const { devices } = coordinate();
    for (const { phaseCurve, groundCurve } of devices) {
      for (const { points } of [...phaseCurve!.lines, ...groundCurve!.lines]) {
        expect(points.length).toBeGreaterThan(1);
        expect(points.every(([amps, seconds]) => amps > 0 && seconds > 0)).toBe(true);
        points.slice(1).forEach(([amps], place) => expect(amps).toBeGreaterThanOrEqual(points[place]![0]));
      }
    }
    const recloser = devices[1]!.phaseCurve!;
    expect(recloser.words).toBe(
      'IEEE extremely inverse, pickup 280 A, time dial 1, instantaneous at 2,000 A in 0.05 s',
    );
    expect(recloser.lines[0]!.points.filter(([amps]) => amps === 2000)).toHaveLength(2);
  });

  it('has nothing to say where no device is on the way', () => {
    const { devices, pairs, working } = coordinate(({ feeder }) => (feeder.devices = []));
    expect([devices, pairs, working]).toEqual([[], [], []]);
  });
});
