import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { Project, Scenario, Study } from '../../../../shared/schemas/study.ts';
import { listIslands } from '../../../../workers/engine/findings/islands.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import { ask, closeTie, inverterStudy, machineStudy } from './island-studies.ts';

function islandsOf(study: Study & { project: Project }) {
  return listIslands(makeScreening(study, proFormaRuleSet)).map(({ operating, islands }) => [
    operating.name,
    islands.map(({ device }) => device.id),
  ]);
}

/** Marrow Lane with a yard and a mill in the island, a second source transformer outside, and scenarios. */
const withScenarios = (...scenarios: Scenario[]) =>
  machineStudy(({ feeder }) => {
    feeder.nodes.push({ id: 'yard', kv: 12.47, phases: 'ABC' });
    feeder.switches = [{ id: 'yard-switch', from: 'poi', to: 'yard', closed: true }];
    feeder.transformers!.push({ ...feeder.transformers![0]!, id: 'bank-2' });
    feeder.machines = [{ id: 'mill', node: 'mid', kind: 'induction', kva: 500, xSubtransientPu: 0.17 }];
    feeder.loads = [{ id: 'shop', node: 'mid', phases: 'ABC', kw: 100, kvar: 0 }];
    feeder.scenarios = scenarios;
  });

describe('Islands', () => {
  it('are what each device on the way to the source leaves, outermost first', () => {
    expect(islandsOf(machineStudy())).toEqual([[undefined, ['CB-1', 'RC-1']]]);
  });

  it('of a scenario are listed only where it changes what is in them', () => {
    const both = ['CB-1', 'RC-1'];
    const listed = (scenario: Omit<Scenario, 'id'>) => islandsOf(withScenarios({ id: 's', ...scenario }));
    expect(listed({ out: ['bank-2'] })).toEqual([[undefined, both]]);
    expect(listed({ switches: { 'yard-switch': true } })).toEqual([[undefined, both]]);
    for (const scenario of [
      { switches: { 'yard-switch': false } },
      { out: ['yard'] },
      { out: ['mill'] },
      { out: ['shop'] },
    ]) {
      expect(listed(scenario), JSON.stringify(scenario)).toEqual([
        [undefined, both],
        ['s', both],
      ]);
    }
  });

  it('leave no answer where a device has another way round it, but call for a study', () => {
    // A longer way from the bus to `poi` has no device on it.
    const study = inverterStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'half', kv: 12.47, phases: 'ABC' }, { id: 'third', kv: 12.47, phases: 'ABC' });
      const [l1] = feeder.lines!;
      feeder.lines!.push(
        { ...l1!, id: 'l3', from: 'bus', to: 'half' },
        { ...l1!, id: 'l4', from: 'half', to: 'third' },
        { ...l1!, id: 'l5', from: 'third', to: 'poi' },
      );
    });
    for (const question of ['islanding', 'load-rejection', 'inverter-grounding'] as const) {
      const [finding] = ask(study, [question]);
      expect(finding).toMatchObject({ verdict: 'needs-data', consequence: 'study', element: 'CB-1' });
      expect(finding!.note).toContain('Opening CB-1 alone leaves this place another way to a source');
    }
  });

  it('of one operating case do not speak for another that has a way round every device', () => {
    const study = inverterStudy((open) => {
      closeTie(open);
      open.feeder.scenarios = [{ id: 's', name: 'Tie open', switches: { tie: false } }];
    });
    for (const question of ['islanding', 'load-rejection', 'inverter-grounding', 'reclosing'] as const) {
      const gap = ask(study, [question, 'islanding']).at(-1);
      expect(gap, question).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
      expect(gap!.note, question).toContain('So it is as the model stands.');
    }
  });

  it('are missing in an operating case that feeds the place over no device that opens', () => {
    const study = inverterStudy((fed) => {
      closeTie(fed);
      fed.feeder.switches![0]!.closed = false;
      fed.feeder.scenarios = [{ id: 's', name: 'Other feed', switches: { tie: true }, out: ['l1'] }];
    });
    const [measured, gap] = ask(study, ['load-rejection']);
    expect(measured).toMatchObject({ verdict: 'within', element: 'RC-1' });
    expect(gap).toMatchObject({ verdict: 'needs-data', value: null });
    expect(gap!.note).toBe(
      'No breaker or sectionalising device is known that would cut this place off from its source. ' +
        'So it is in operating case "Other feed".',
    );
  });
});
