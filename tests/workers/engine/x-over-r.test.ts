import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { DeviceDuty, FaultKind } from '../../../shared/schemas/study-result.ts';
import type { Device, Impedance, Study } from '../../../shared/schemas/study.ts';
import { asymmetryFactor, largestXr, peakFactor } from '../../../workers/engine/asymmetry.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { findTestXr, ratingFactor } from '../../../workers/engine/rating-basis.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { findFaultPoint, solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import {
  findComplexXr,
  findSeparateXr,
  reduceSeparately,
  separateModels,
} from '../../../workers/engine/x-over-r.ts';
import { checkedStudy, readCase } from './cases.ts';
import { denseImpedance } from './dense-solve.ts';
import { randomNetwork } from './random-networks.ts';

const ohms = (r: number, x: number): Impedance => ({ r, x });

/** One bus with sources given by Z1 = Z2 and Z0, a three-phase line to `far` and one of phase A to `end`. */
function busWith(sources: readonly (readonly [z1: Impedance, z0: Impedance])[]): Study {
  const line = { from: 'bus', km: 1, z1: ohms(0.2, 0.4), z0: ohms(0.5, 1.3) };
  return {
    format: 'feederwright.study/1',
    frequencyHz: 60,
    baseMva: 10,
    prefaultFactor: { max: 1, min: 1 },
    feeder: {
      nodes: [
        ...['bus', 'far'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
        { id: 'end', kv: 12.47, phases: 'A' },
      ],
      sources: sources.map(([z1, z0], index) => ({ id: `s${index}`, node: 'bus', max: { z1, z0 } })),
      lines: [
        { ...line, id: 'trunk', to: 'far', phases: 'ABC' },
        { ...line, id: 'lateral', to: 'end', phases: 'A' },
      ],
    },
  };
}

function ratiosAt(study: Study, node: string) {
  const model = prepareModel(study);
  const solved = solveCase(model, choiceOfState('before', study));
  const cases = reduceSeparately(separateModels(study, model), solved);
  const index = model.nodeIndex.get(node)!;
  const point = findFaultPoint(solved, index)!;
  return {
    complex: (kind: FaultKind) => findComplexXr(point, kind),
    separate: findSeparateXr(cases, index),
  };
}

describe('X/R at a fault', () => {
  // Two sources at a bus: R 0.1 ∥ 1 = 0.0909, X 1 ∥ 1 = 0.5, X/R 5.5; together (0.1 + j1) ∥ (1 + j1) = 0.2322 + j0.5777.
  const two = busWith([
    [ohms(0.1, 1), ohms(0.1, 1)],
    [ohms(1, 1), ohms(1, 1)],
  ]);

  it('is by separate reduction that of resistances alone and reactances alone', () => {
    const { complex, separate } = ratiosAt(two, 'bus');
    for (const kind of ['threePhase', 'lineLine', 'lineGround', 'lineLineGround'] as const) {
      expect(separate(kind)).toBeCloseTo(5.5, 9);
      expect(complex(kind)).toBeCloseTo(3.01 / 1.21, 9);
    }
  });

  it('takes in every sequence that the fault drives current through, and the path of a lateral', () => {
    const one = busWith([[ohms(0.1, 1), ohms(0.4, 2)]]);
    const atBus = ratiosAt(one, 'bus');
    expect(atBus.separate('threePhase')).toBeCloseTo(10, 9);
    expect(atBus.separate('lineLine')).toBeCloseTo(10, 9);
    expect(atBus.separate('lineGround')).toBeCloseTo(4 / 0.6, 9);
    // R 0.1 + 0.1 ∥ 0.4 = 0.18, X 1 + 1 ∥ 2 = 1.6667.
    expect(atBus.separate('lineLineGround')).toBeCloseTo(5 / 3 / 0.18, 9);
    // Self impedance of the lateral: (z0 + 2·z1)/3 = 0.3 + j0.7.
    const atEnd = ratiosAt(one, 'end');
    expect(atEnd.separate('lineGround')).toBeCloseTo((4 / 3 + 0.7) / (0.2 + 0.3), 9);
    expect(atEnd.complex('lineGround')).toBeCloseTo((4 / 3 + 0.7) / (0.2 + 0.3), 9);
  });

  it('is the same both ways where there is only one path', () => {
    const study = busWith([[ohms(0.1, 1), ohms(0.4, 2)]]);
    for (const kind of ['threePhase', 'lineLine', 'lineGround'] as const) {
      const { complex, separate } = ratiosAt(study, 'far');
      expect(separate(kind)).toBeCloseTo(complex(kind), 9);
    }
  });

  it('has a bound that stands for no resistance at all', () => {
    const { complex, separate } = ratiosAt(busWith([[ohms(0, 1), ohms(0, 1)]]), 'bus');
    expect(complex('threePhase')).toBe(largestXr);
    expect(separate('threePhase')).toBeCloseTo(largestXr, 3);
  });

  it('gives a machine without a resistance the one that IEC 60909-0 uses for its direct current', () => {
    const study = busWith([]);
    study.feeder.machines = [
      {
        id: 'm',
        node: 'bus',
        kind: 'synchronous',
        kva: 1000,
        xSubtransientPu: 0.2,
        neutral: 'ungrounded',
      },
    ];
    expect(ratiosAt(study, 'bus').separate('threePhase')).toBeCloseTo(1 / 0.07, 6);
    study.feeder.machines[0]!.rPu = 0.01;
    expect(ratiosAt(study, 'bus').separate('threePhase')).toBeCloseTo(20, 6);
  });

  it('agrees on random networks with a dense solve of each, and neither part exceeds the Thevenin one', () => {
    fc.assert(
      fc.property(randomNetwork, (network) => {
        const study = { ...network, feeder: { ...network.feeder, machines: [] } };
        const partOf = (keep: (z: Impedance) => Impedance): Study => ({
          ...study,
          feeder: {
            ...study.feeder,
            lines: study.feeder.lines!.map((line) => ({ ...line, z1: keep(line.z1!), z0: keep(line.z0!) })),
            sources: study.feeder.sources!.map(({ max, ...source }) => ({
              ...source,
              max: { z1: keep(max.z1), z0: keep(max.z0!) },
            })),
          },
        });
        const r = partOf((z) => ohms(z.r, 0));
        const x = partOf((z) => ohms(0, z.x));
        const dense = {
          r1: denseImpedance(r, 'z1', false),
          r0: denseImpedance(r, 'z0', false),
          x1: denseImpedance(x, 'z1', false),
          x0: denseImpedance(x, 'z0', false),
          z1: denseImpedance(study, 'z1', false),
        };
        study.feeder.nodes.forEach(({ id }, at) => {
          const { separate } = ratiosAt(study, id);
          const [r1, r0] = [dense.r1[at]![at]!.re, dense.r0[at]![at]!.re];
          const [x1, x0] = [dense.x1[at]![at]!.im, dense.x0[at]![at]!.im];
          expect(separate('threePhase') / (x1 / r1)).toBeCloseTo(1, 8);
          expect(separate('lineGround') / ((2 * x1 + x0) / (2 * r1 + r0))).toBeCloseTo(1, 8);
          // Currents spread so that they lose least (W. Thomson); any other spread, as that of phasors, loses more.
          expect(r1).toBeLessThanOrEqual(dense.z1[at]![at]!.re * (1 + 1e-9));
          expect(x1).toBeLessThanOrEqual(dense.z1[at]![at]!.im * (1 + 1e-9));
        });
      }),
      { numRuns: 60, seed: 20261201 },
    );
  });
});

const at = (kv: number, frequencyHz = 60) => ({ kv, frequencyHz });

const device = (changes: Partial<Device> = {}): Device => ({
  id: 'd',
  branch: 'trunk',
  end: 'from',
  kind: 'fuse',
  interruptingKa: 10,
  ...changes,
});

describe('A symmetrical rating', () => {
  it('holds up to the X/R that it was tested at, and is compared with the direct current in above', () => {
    const fuse = device({ testXr: 8 });
    expect(ratingFactor(fuse, at(12.47), 3)).toBe(1);
    expect(ratingFactor(fuse, at(12.47), 8)).toBe(1);
    expect(ratingFactor(fuse, at(12.47), 20)).toBeCloseTo(1.5687 / 1.3827, 4);
  });

  // √((1 + 2·e^(−8π/25))/(1 + 2·e^(−8π/17))): two cycles after the fault began.
  it('of a breaker is compared when its contacts part', () => {
    expect(ratingFactor(device({ kind: 'breaker', testXr: 17 }), at(12.47), 25)).toBeCloseTo(1.0903, 3);
    expect(ratingFactor(device({ kind: 'breaker', testXr: 17 }), at(0.48), 25)).toBeCloseTo(
      1.5986 / 1.5434,
      3,
    );
  });

  it('has by default the lowest standard test X/R of its kind', () => {
    const lowest = (kind: string, kv = 12.47) => findTestXr(device({ kind }), at(kv));
    expect(lowest('breaker')).toEqual({ xr: 17, isGiven: false });
    expect(findTestXr(device({ kind: 'breaker' }), at(12.47, 50)).xr).toBe(14);
    expect(lowest('Recloser').xr).toBe(8);
    expect(lowest('fuse').xr).toBe(8);
    expect(lowest('own name').xr).toBe(8);
    expect(lowest('breaker', 0.48).xr).toBe(1.73);
    expect(findTestXr(device({ testXr: 12 }), at(12.47))).toEqual({ xr: 12, isGiven: true });
  });

  it('gives way to an asymmetrical one where the rating is that', () => {
    expect(ratingFactor(device({ ratingBasis: 'asymmetrical' }), at(12.47), 5)).toBeCloseTo(1.2527, 4);
  });
});

describe('The asymmetry at a device', () => {
  const dutyOf = (study: Study, changes: Partial<Device> = {}): DeviceDuty => {
    study.feeder.devices = [device(changes)];
    return runStudy(checkedStudy(study), proFormaRuleSet).devices.d!.before;
  };
  // Z1 = 0.1 + j1, Z0 = 0.1 + j1: all faults have X/R 10, three-phase the largest current, 12.47/√3/|0.1 + j1| = 7164 A.
  const study = busWith([[ohms(0.1, 1), ohms(0.1, 1)]]);

  it('stands beside the contract, which it leaves as it is', () => {
    const duty = dutyOf(study, { testXr: 8 });
    expect(duty.availableA).toBeCloseTo(7163.9, 0);
    expect(duty.availableLoading).toBeCloseTo(0.71639, 4);
    expect(duty.xr).toBeCloseTo(10, 9);
    expect(duty.xrSeparate).toBeCloseTo(10, 9);
    expect(duty.asymmetry).toBeCloseTo(asymmetryFactor(10), 9);
    expect(duty.peakA).toBeCloseTo(duty.availableA * peakFactor(10), 6);
    expect(duty.correctedLoading).toBeCloseTo(duty.availableLoading! * (1.4377 / 1.3827), 4);
  });

  it('counts the fault that is worst with it, not the largest without', () => {
    // Three-phase X/R is 5. Two lines to ground: R 0.2 + 0.2 ∥ 0.02, X 1 + 1 ∥ 1.5.
    const other = busWith([[ohms(0.2, 1), ohms(0.02, 1.5)]]);
    other.feeder.devices = [device({ testXr: 2 })];
    const { devices, nodes } = runStudy(checkedStudy(other), proFormaRuleSet);
    const { threePhase, lineLineGround } = nodes.bus!.before;
    const duty = devices.d!.before;
    expect(threePhase).toBeGreaterThan(lineLineGround!);
    expect(duty.availableA).toBeCloseTo(threePhase!, 9);
    const xr = (1 + 1.5 / 2.5) / (0.2 + 0.004 / 0.22);
    expect(duty.xrSeparate).toBeCloseTo(xr, 9);
    const counted = (lineLineGround! * asymmetryFactor(xr)) / asymmetryFactor(2);
    expect(counted).toBeGreaterThan((threePhase! * asymmetryFactor(5)) / asymmetryFactor(2));
    expect(duty.correctedLoading).toBeCloseTo(counted / 10_000, 9);
  });

  it('is not looked for at a device without a rating', () => {
    const { interruptingKa: _, ...unrated } = device();
    study.feeder.devices = [unrated];
    const { before } = runStudy(checkedStudy(study), proFormaRuleSet).devices.d!;
    expect(Object.keys(before)).toEqual([
      'dutyA',
      'fault',
      'side',
      'loading',
      'availableA',
      'availableLoading',
    ]);
  });
});

describe('The interrupting-duty finding', () => {
  const findingOf = (change: (devices: Device[]) => void) => {
    const marrowLane = structuredClone(readCase('marrow-lane'));
    change(marrowLane.feeder.devices!);
    const { findings } = runStudy(checkedStudy(marrowLane), proFormaRuleSet);
    return findings.find(({ id, element }) => id === 'interrupting-duty' && element === 'RC-1')!;
  };

  // Three-phase at `mid` 83.055 % (see the case's README). No resistance but that of the machine: X/R over 1000.
  it('uses the corrected loading where X/R passes the test X/R, and says so', () => {
    const finding = findingOf(([, recloser]) => (recloser!.testXr = 12));
    expect(finding.value! / 83.055).toBeCloseTo(Math.sqrt(3) / 1.4781, 3);
    expect(finding.verdict).toBe('outside');
    expect(finding.note).toContain('4983 A available against a rating of 6 kA.');
    expect(finding.note).toContain('above the test X/R of 12: the current counts 1.17');
  });

  it('takes the lowest standard value where the test X/R is not given, and says so', () => {
    const finding = findingOf(([, recloser]) => delete recloser!.testXr);
    expect(finding.value! / 83.055).toBeCloseTo(Math.sqrt(3) / 1.3827, 3);
    expect(finding.note).toContain('test X/R is not given: 8, the lowest standard value for its kind');
  });

  it('compares an asymmetrical rating with the asymmetrical current', () => {
    const finding = findingOf(([, recloser]) => (recloser!.ratingBasis = 'asymmetrical'));
    expect(finding.value! / 83.055).toBeCloseTo(Math.sqrt(3), 3);
    expect(finding.note).toContain('The rating is asymmetrical');
  });
});
