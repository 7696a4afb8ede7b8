import { describe, expect, it } from 'vitest';
import type { Device, Study } from '../../../../shared/schemas/study.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { answersTo, handStudy, phaseVolts } from './reach-studies.ts';

const id = 'interrupting-duty';

/** With the project, two lines to ground at `mid` draw more than three phases do; `end` of l1 sees V/2 of the latter alone. */
function withDevices(devices: Device[], change: (study: Study) => void = () => {}): Study {
  return handStudy((study) => {
    study.feeder.devices = devices;
    study.project!.groundingBanks = [];
    change(study);
  });
}

const at = (more: Partial<Device> = {}): Device => ({
  id: 'X',
  branch: 'l1',
  end: 'to',
  kind: 'recloser',
  testXr: 1e4,
  ...more,
});

describe('Interrupting duty, worked', () => {
  it('holds a switch or an elbow against the current that it may be closed on', () => {
    const closing = answersTo(id, withDevices([at({ kind: 'elbow', faultClosingKa: 4 })]));
    expect(closing).toMatchObject([{ element: 'X, closing', verdict: 'outside', limit: 87.5 }]);
    expect(closing[0]!.value).toBeCloseTo((phaseVolts / 2 / 4000) * 100, 6);
    expect(closing[0]!.note).toContain('fault-closing rating of 4 kA');
    expect(answersTo(id, withDevices([at({ kind: 'switch', faultClosingKa: 8 })]))[0]!.verdict).toBe(
      'within',
    );
    const both = answersTo(id, withDevices([at({ interruptingKa: 16, faultClosingKa: 4 })]));
    expect(both.map(({ element }) => element)).toEqual(['X, closing']);
  });

  it('needs the rating that belongs to the kind', () => {
    const note = (device: Device) =>
      answersTo(id, withDevices([device])).find(({ verdict }) => verdict === 'needs-data')?.note;
    expect(note(at({ kind: 'elbow' }))).toBe('Its fault-closing rating is not known.');
    expect(note(at())).toBe('Its interrupting rating is not known.');
    expect(note(at({ faultClosingKa: 8 }))).toBe('Its interrupting rating is not known.');
    expect(note(at({ kind: 'elbow', faultClosingKa: 8 }))).toBeUndefined();
  });

  it('says where the rated voltage is under that of the place, not where it is the same', () => {
    const ratedAt = (ratedKv: number) => answersTo(id, withDevices([at({ interruptingKa: 16, ratedKv })]));
    expect(ratedAt(12.47)).toHaveLength(1);
    expect(ratedAt(8.3)[1]).toMatchObject({
      element: 'X, rated voltage',
      verdict: 'outside',
      limit: 100,
      unit: '%',
    });
    expect(ratedAt(8.3)[1]!.value).toBeCloseTo((12.47 / 8.3) * 100, 9);
  });

  it('says how many devices have no rated voltage on record, and blocks nothing for it', () => {
    const rated = at({ id: 'Y', interruptingKa: 16, ratedKv: 15 });
    const noteOf = (...devices: Device[]) => {
      const found = answersTo(id, withDevices(devices));
      expect(found).toMatchObject([{ verdict: 'within' }]);
      return found[0]!.note;
    };
    expect(noteOf(rated)).not.toContain('rated voltage');
    expect(noteOf(rated, at({ interruptingKa: 16 }))).toContain('1 device has no rated voltage on record');
    const two = [at({ interruptingKa: 16 }), at({ id: 'Z', interruptingKa: 16 })];
    expect(noteOf(...two)).toContain('2 devices have no rated voltage on record');
  });

  it("holds the customer's panel behind the project's own transformer against the fault current there", () => {
    const panel = (ka: number | undefined, faultCurrentPu = 1.2) =>
      answersTo(
        id,
        withDevices([at({ interruptingKa: 40 })], ({ project }) => {
          project!.nodes = [{ id: 'site', kv: 0.48, phases: 'ABC' }];
          const size = { kva: 500, connection: 'Dyn1' as const, impedancePercent: 5, xr: 1.5 };
          project!.transformers = [{ ...size, id: 'own', from: 'mid', to: 'site' }];
          project!.inverters = [{ id: 'i', node: 'site', phases: 'ABC', kva: 400, faultCurrentPu }];
          if (ka !== undefined) project!.panelInterruptingKa = ka;
        }),
      ).filter(({ element }) => element?.includes('panel'));
    const [small] = panel(5);
    expect(small).toMatchObject({
      element: 'plant (panel)',
      verdict: 'outside',
      limit: 87.5,
      before: null,
    });
    // Between 500 kVA behind 5 % with some grid before it, and that from an unlimited grid with the inverters besides.
    const through = (500 / 0.05 / (Math.sqrt(3) * 0.48)) * 1.05;
    const own = (1.2 * 400) / (Math.sqrt(3) * 0.48);
    expect(small!.value!).toBeGreaterThan(((0.7 * through) / 5000) * 100);
    expect(small!.value!).toBeLessThan(((through + own) / 5000) * 100);
    expect(panel(5, 3)[0]!.value!).toBeGreaterThan(small!.value!);
    expect(panel(50)[0]!.verdict).toBe('within');
    expect(listFaults(small!.working!)).toEqual([]);
    expect(panel(undefined)).toEqual([]);
  });

  it('takes the lowest standard test X/R for the kind where none is given, and says so', () => {
    const [finding] = answersTo(id, withDevices([at({ testXr: undefined, interruptingKa: 8 })]));
    expect(finding!.note).toContain(
      'Its test X/R is not given: 8, the lowest standard value for its kind, is taken.',
    );
    // X/R without bound here: √3 over the 1.3827 of X/R 8.
    expect(finding!.value).toBeCloseTo((((phaseVolts / 2) * 1.7321) / 1.3827 / 8000) * 100, 1);
    expect(listFaults(finding!.working!)).toEqual([]);
  });

  it('passes exactly the limit', () => {
    const study = withDevices([at({ interruptingKa: 8 })]);
    const value = answersTo(id, study)[0]!.value!;
    const verdictAt = (comparison: '<=' | '<') =>
      answersTo(id, study, { limits: [{ limit: value, comparison, consequence: 'study' }] })[0]!.verdict;
    expect([verdictAt('<='), verdictAt('<')]).toEqual(['within', 'outside']);
  });

  it('shows working that its printed numbers repeat, inverters and asymmetrical ratings too', () => {
    const inverters = (study: Study) => {
      study.project!.inverters = [
        { id: 'solar', node: 'mid', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2, faultAngleDeg: 0 },
      ];
    };
    const devices = [
      at({ interruptingKa: 8, testXr: 15 }),
      at({ interruptingKa: 8, ratingBasis: 'asymmetrical', testXr: undefined }),
      at({ kind: 'breaker', interruptingKa: 8, testXr: undefined }),
      at({ kind: 'switch', faultClosingKa: 8 }),
    ];
    for (const device of devices) {
      const [{ working, value }] = answersTo(id, withDevices([device], inverters)) as [
        Required<ReturnType<typeof answersTo>[number]>,
      ];
      expect(listFaults(working)).toEqual([]);
      expect(working.at(-1)!.result.value).toBeCloseTo(value!, 9);
      expect(working.some(({ result }) => result.symbol === 'I_bare')).toBe(true);
    }
  });
});
