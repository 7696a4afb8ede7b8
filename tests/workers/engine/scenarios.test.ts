import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Scenario, Study } from '../../../shared/schemas/study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy, readCase } from './cases.ts';

/* The case is worked by hand in its README. */
const fallowBridge = readCase('fallow-bridge');

function changed(change: (study: Study) => void): Study {
  const study = structuredClone(fallowBridge);
  change(study);
  return checkedStudy(study);
}

const without = changed(({ feeder }) => delete feeder.scenarios);
const run = (study: Study) => runStudy(study, proFormaRuleSet);
const result = run(fallowBridge);
const answerOf = (id: string, study = fallowBridge) =>
  run(study).findings.find((finding) => finding.id === id)!;

describe('Scenarios', () => {
  it('report beside each device the one that makes most current available', () => {
    const { worst } = result.devices['CB-1']!;
    expect(worst).toMatchObject({ scenario: 'tied', state: 'after' });
    expect(worst!.availableA).toBeCloseTo(9821.03, 1);
    expect(worst!.availableLoading).toBeCloseTo(0.892821, 5);
    expect(worst!.dutyA).toBeCloseTo(9587.2, 1);
    expect(worst!.loading).toBeCloseTo(0.871563, 5);
    expect(result.devices['CB-2']!.worst!.availableLoading).toBeCloseTo(0.613814, 5);
  });

  it('double the fault current with the tie closed between two equal banks', () => {
    const { devices } = run(changed((study) => delete study.project));
    const { before, after, worst } = devices['CB-1']!;
    expect(after).toBeUndefined();
    expect(worst).toMatchObject({ scenario: 'tied', state: 'before' });
    expect(worst!.availableA / before.availableA).toBeCloseTo(2, 9);
    expect(worst!.availableA).toBeCloseTo(9579.1, 1);
  });

  it('leave everything else in the result as it is without them', () => {
    const alone = run(without);
    for (const key of ['nodes', 'project', 'grounding'] as const) expect(result[key]).toEqual(alone[key]);
    for (const [id, { before, after }] of Object.entries(alone.devices)) {
      expect(result.devices[id]).toMatchObject({ before, after });
      expect(alone.devices[id]).not.toHaveProperty('worst');
    }
    expect(alone.warnings).toEqual([]);
  });

  it('decide interrupting duty by name where one of them is worst', () => {
    const finding = answerOf('interrupting-duty');
    expect(finding).toMatchObject({ element: 'CB-1', verdict: 'outside' });
    expect(finding.value).toBeCloseTo(89.282, 3);
    expect(finding.before).toBeCloseTo(87.083, 3);
    expect(finding.note).toContain('"Bus tie closed" decides');
    expect(answerOf('interrupting-duty', without).value).toBeCloseTo(45.716, 3);
  });

  it('decide the contribution and the short-circuit ratio by name', () => {
    const contribution = answerOf('contribution');
    expect(contribution.value).toBeCloseTo(15.3846, 4);
    expect(contribution.note).toContain('"Fed from bus 2" decides');
    expect(answerOf('contribution', without).value).toBeCloseTo(11.5385, 4);
    const ratio = answerOf('short-circuit-ratio');
    expect(ratio.value).toBeCloseTo(25, 9);
    expect(ratio.note).toContain('"Fed from bus 2" decides');
  });

  it('say so where the model as it stands is worst', () => {
    const study = changed(({ feeder }) => (feeder.scenarios = feeder.scenarios!.slice(0, 1)));
    const finding = answerOf('contribution', study);
    expect(finding.value).toBeCloseTo(11.5385, 4);
    expect(finding.note).toContain('the model as it stands decides');
    expect(answerOf('contribution', without).note).not.toContain('decides');
  });

  it('leave a device out with its branch', () => {
    const study = changed(({ feeder }) => {
      feeder.scenarios = [{ id: 'out', switches: { tie: true }, out: ['l1'] }];
    });
    const { devices } = run(study);
    expect(devices['CB-1']).not.toHaveProperty('worst');
    expect(devices['CB-2']!.worst!.scenario).toBe('out');
  });

  it('warn of what they leave dead, and by the id where there is no name', () => {
    expect(result.warnings).toEqual(['Scenario "Bank 1 out" leaves dead: bus-1, poi.']);
    const study = changed(({ feeder }) => (feeder.scenarios = [{ id: 'gone', out: ['bus-2'] }]));
    expect(run(study).warnings).toEqual(['Scenario "gone" leaves dead: far.']);
  });

  it('count the weakest source, and not inverters that they take out', () => {
    const there = (scenario: Scenario) =>
      changed(({ feeder }) => {
        feeder.inverters = [{ id: 'solar', node: 'poi', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2 }];
        // A weakest source of j0.11 makes j0.25 of what is j0.15 at `poi`.
        feeder.sources![0]!.min = { z1: { r: 0, x: 0.11 * 1322.5 } };
        feeder.scenarios = [scenario];
      });
    expect(answerOf('short-circuit-ratio', there({ id: 'same' })).value).toBeCloseTo(40 / 4, 9);
    const tied = answerOf('short-circuit-ratio', there({ id: 'tied', switches: { tie: true } }));
    expect(tied).toMatchObject({ note: expect.stringContaining('the model as it stands decides') as string });
    // Fed from bus 2 over a line of j0.90 it is j1.00: 10 MVA over the project alone, as the inverter is gone.
    const turned = there({ id: 'turned', switches: { alternate: true }, out: ['l1', 'solar'] });
    turned.feeder.lines![1]!.z1 = { r: 0, x: (0.9 * 12.47 ** 2) / 10 };
    expect(answerOf('short-circuit-ratio', turned).value).toBeCloseTo(5, 9);
  });

  it('are computed with motors and by IEC 60909-0 where the study asks for those', () => {
    const study = changed((file) => {
      file.options = { method: 'iec60909', motorLoad: true };
      file.feeder.loads = [{ id: 'mill', node: 'bus-2', phases: 'ABC', kw: 4000, kvar: 0, motorFraction: 1 }];
      file.feeder.scenarios = [
        { id: 'tied', switches: { tie: true } },
        { id: 'idle', switches: { tie: true }, out: ['mill'] },
      ];
    });
    const { worst } = run(study).devices['CB-1']!;
    const closed = structuredClone(study);
    closed.feeder.switches![0]!.closed = true;
    delete closed.feeder.scenarios;
    expect(worst!.scenario).toBe('tied');
    expect(worst!.availableA).toBeCloseTo(run(closed).devices['CB-1']!.after!.availableA, 6);
    study.feeder.scenarios = study.feeder.scenarios!.slice(1);
    delete closed.feeder.loads;
    expect(run(study).devices['CB-1']!.worst!.availableA).toBeCloseTo(
      run(closed).devices['CB-1']!.after!.availableA,
      6,
    );
  });
});
