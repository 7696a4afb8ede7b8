import { describe, expect, it } from 'vitest';
import type { FaultKind } from '../../../shared/schemas/study-result.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { magnitude, multiply, polar, sum, zero } from '../../../workers/engine/complex.ts';
import { currentFromBranch } from '../../../workers/engine/devices.ts';
import { listFaultsThrough } from '../../../workers/engine/fault-impedance.ts';
import type { FaultPoint } from '../../../workers/engine/faults.ts';
import { largestPhase, lineGroundFault, listBoltedFaults } from '../../../workers/engine/faults.ts';
import { reportNode } from '../../../workers/engine/node-results.ts';
import { phasesOf, sequencesOf } from '../../../workers/engine/open-circuit.ts';
import { baseAmps } from '../../../workers/engine/per-unit.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { findFaultPoint, solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { checkedStudy } from './cases.ts';

/* Further textbook faults. Tolerance: one unit in the last digit printed, unless a comment says otherwise. */

const expectNear = (got: number, expected: number, unit: number) =>
  expect(Math.abs(got - expected), `${got} against ${expected}`).toBeLessThanOrEqual(unit);

const degrees = ({ re, im }: Complex) => (Math.atan2(im, re) * 180) / Math.PI;

/* H. Saadat, Power System Analysis, example 10.5: data read in a public copy, values reproduced by calculation. */
describe('Saadat, example 10.5, faults through j0.1', () => {
  const j = (im: number): Complex => ({ re: 0, im });
  const zf = j(0.1);
  const point: FaultPoint = {
    phases: 7,
    z1: j(0.22),
    z2: j(0.22),
    z0: j(0.35),
    self: zero,
    mutual: zero,
    voltage: phasesOf({ re: 1, im: 0 }, zero, zero),
    balanced: true,
  };
  const faultOf = (kind: FaultKind) => {
    const faults = listFaultsThrough(point, kind, zf);
    expect(faults).toHaveLength(1);
    return faults[0]!;
  };

  it('finds 3.1250 for three phases', () => {
    expectNear(largestPhase(faultOf('threePhase')), 3.125, 1e-4);
  });

  it('finds 2.7523 from line to ground, −j0.9174 in each sequence', () => {
    const fault = faultOf('lineGround');
    expectNear(magnitude(fault.earth), 2.7523, 1e-4);
    for (const current of Object.values(sequencesOf(fault.currents))) expectNear(current.im, -0.9174, 1e-4);
    expectNear(magnitude(lineGroundFault(point, 0, zf).earth), 2.7523, 1e-4);
  });

  it('finds 3.2075 from line to line, 1.8519 in the positive sequence', () => {
    const fault = faultOf('lineLine');
    expectNear(largestPhase(fault), 3.2075, 1e-4);
    expectNear(magnitude(sequencesOf(fault.currents).i1), 1.8519, 1e-4);
  });

  // The book faults phases b and c, the engine the like pair a and b, whose sequence values have the same size.
  it('finds 4.0583 in two lines to ground and 1.9737 in the earth', () => {
    const fault = faultOf('lineLineGround');
    expectNear(largestPhase(fault), 4.0583, 1e-4);
    expectNear(magnitude(fault.earth), 1.9737, 1e-4);
    const { i1, i2, i0 } = sequencesOf(fault.currents);
    expectNear(magnitude(i1), 2.6017, 1e-4);
    expectNear(magnitude(i2), 1.9438, 1e-4);
    expectNear(magnitude(i0), 0.6579, 1e-4);
    // Between the phase that leads and the earth: 165.93° − 90° there, turned with the pair here.
    expectNear(Math.abs(degrees(multiply(fault.currents[0], conjugate(fault.earth)))), 75.93, 0.01);
  });

  it('is the bolted fault where the impedance is zero', () => {
    for (const fault of listBoltedFaults(point)) {
      expect(listFaultsThrough(point, fault.kind, zero)).toEqual([fault]);
    }
  });
});

function conjugate({ re, im }: Complex): Complex {
  return { re, im: -im };
}

/* Soni, Gupta, Bhatnagar, Chakrabarti, A Course in Electrical Power, part III chapter 4: read in a public copy. */
describe('Soni, Gupta, Bhatnagar, Chakrabarti, chapter 4, further examples', () => {
  const base = {
    format: 'feederwright.study/1',
    frequencyHz: 50,
    prefaultFactor: { max: 1, min: 1 },
  } as const;

  it('finds 203.7 A from line to line where Z1 and Z2 differ (4.9)', () => {
    const study = checkedStudy({
      ...base,
      baseMva: 10,
      feeder: {
        nodes: ['near', 'far'].map((id) => ({ id, kv: 11, phases: 'ABC' })),
        sources: [{ id: 'alternator', node: 'near', max: { z1: { r: 0, x: 27 }, z2: { r: 0, x: 9 } } }],
        lines: [
          {
            id: 'line',
            from: 'near',
            to: 'far',
            phases: 'ABC',
            km: 1,
            z1: { r: 0, x: 9 },
            z0: { r: 0, x: 9 },
          },
        ],
      },
    });
    const model = prepareModel(study);
    const solved = solveCase(model, choiceOfState('none', study));
    expectNear(reportNode(solved, model.nodeIndex.get('far')!).lineLine!, 203.7, 0.05);
  });

  it('finds what the alternator gives to a line-to-ground fault beyond a delta-star transformer (4.14)', () => {
    const study = checkedStudy({
      ...base,
      baseMva: 10,
      feeder: {
        nodes: ['terminal', 'far'].map((id) => ({ id, kv: 13.8, phases: 'ABC' })),
        machines: [
          {
            id: 'alternator',
            node: 'terminal',
            kind: 'synchronous',
            kva: 10_000,
            xSubtransientPu: 0.1,
            neutral: 'ungrounded',
          },
        ],
        transformers: [
          {
            id: 'bank',
            from: 'terminal',
            to: 'far',
            kva: 10_000,
            connection: 'Dyn1',
            // The book leaves the transformer's own impedance out, and has a reactor of 6 % in its neutral.
            impedancePercent: 1e-5,
            xr: 1e9,
            neutralTo: { r: 0, x: (0.06 * 13.8 ** 2) / 10 },
          },
        ],
      },
    } satisfies Study);
    const model = prepareModel(study);
    const solved = solveCase(model, choiceOfState('before', study));
    const point = findFaultPoint(solved, model.nodeIndex.get('far')!)!;
    const fault = listBoltedFaults(point).find(({ kind }) => kind === 'lineGround')!;
    const branch = model.branches[model.branchIndex.get('bank')!]!;
    const { i1, i2, i0 } = sequencesOf(currentFromBranch(solved, branch, 'to', fault));
    for (const current of [i1, i2, i0]) expectNear(magnitude(current), 2.6316, 1e-4);

    // The star lags by 30°: back at the delta the positive sequence turns ahead, the negative one behind, and no zero
    // sequence comes through.
    const terminal = phasesOf(multiply(i1, polar(1, 30)), multiply(i2, polar(1, -30)), zero);
    const amps = baseAmps(10, 13.8);
    const largest = terminal.map((current) => magnitude(current) * amps).sort((p, q) => p - q);
    expectNear(largest[0]!, 0, 0.1);
    expectNear(largest[1]!, 1907, 1);
    expectNear(largest[2]!, 1907, 1);
    expect(magnitude(sum(...terminal))).toBeLessThan(1e-9);
  });
});
