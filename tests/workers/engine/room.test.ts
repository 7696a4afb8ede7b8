import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Finding } from '../../../shared/schemas/findings.ts';
import type { RoomNode } from '../../../shared/schemas/rooms.ts';
import type { Rule, RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Project, Study } from '../../../shared/schemas/study.ts';
import { makeLoadedNetwork } from '../../../workers/bench/room.ts';
import { makeInverterProject, makeMachineProject } from '../../../workers/engine/room/plants.ts';
import { findRoom } from '../../../workers/engine/room/room.ts';
import { measureFindings, measureRule, shrink } from '../../../workers/engine/room/sizes.ts';
import { screenStudy } from '../../../workers/engine/trials.ts';

/** Findings of a whole study that room counts: not of what lacks data there, and not of the kind of plant alone. */
function countedFailures(study: Study, project: Project, ruleSet: RuleSet, counted: string[]): Finding[] {
  const screened = screenStudy({ ...study, project }, ruleSet);
  if ('problems' in screened) throw new Error('The findings hold what is no number');
  return screened.findings.filter(
    ({ id, verdict, value, consequence }) =>
      counted.includes(id) && verdict === 'outside' && value !== null && consequence !== 'note',
  );
}

const plantOf = {
  inverters: ({ node }: RoomNode, kva: number) => makeInverterProject(node, kva),
  machine: ({ node, kv }: RoomNode, kva: number) => makeMachineProject(node, kv, kva),
};

/** Just under passes, just over fails at what is named; gives the questions that bound. */
function holdAgainstStudies(study: Study, ruleSet: RuleSet, every: number): Set<string> {
  const { nodes, counted } = findRoom(study, ruleSet);
  const bound = new Set<string>();
  for (const node of nodes.filter((_, index) => index % every === 0)) {
    for (const kind of ['inverters', 'machine'] as const) {
      const { kva, bindsAt } = node[kind];
      const failuresAt = (size: number) =>
        countedFailures(study, plantOf[kind](node, size), ruleSet, counted)
          .filter(({ id }) => !node.lacking.includes(id))
          .map(({ id, element = null }) => ({ question: id, element }));
      const words = `${kind} at ${node.node}, ${kva} kVA`;
      if (kva > 0) expect(failuresAt(kva * 0.999), words).toEqual([]);
      if (!bindsAt) continue;
      bound.add(bindsAt.question);
      expect(failuresAt(Math.max(1, kva * 1.001)), words).toContainEqual(bindsAt);
    }
  }
  return bound;
}

/** Only these questions, so that the others do not bind first. */
function asking(...ids: (keyof typeof proFormaRuleSet.rules)[]): RuleSet {
  return { ...proFormaRuleSet, rules: Object.fromEntries(ids.map((id) => [id, proFormaRuleSet.rules[id]])) };
}

const study = makeLoadedNetwork(120);

describe('against whole studies at sampled nodes', () => {
  it('by the shipped rules', () => {
    // Little load beyond the first device, so that there more than the size of Fast Track binds.
    const sections = study.feeder.sections!.map((section) => ({ ...section, peakKw: 9000 }));
    const light: Study = { ...study, feeder: { ...study.feeder, sections } };
    const bound = holdAgainstStudies(light, proFormaRuleSet, 17);
    expect(bound.size).toBeGreaterThan(1);
  });

  it('by fault current added alone, with machines and inverters there already', () => {
    expect(holdAgainstStudies(study, asking('contribution'), 20)).toEqual(new Set(['contribution']));
  });

  it('by interrupting duty alone, above the test X/R too', () => {
    const devices = study.feeder.devices!.map((device) => ({ ...device, interruptingKa: 11, testXr: 8 }));
    const tight: Study = { ...study, feeder: { ...study.feeder, devices } };
    expect(holdAgainstStudies(tight, asking('interrupting-duty'), 20)).toContain('interrupting-duty');
  });

  it('by the strength of the grid alone', () => {
    const [source] = study.feeder.sources!;
    const weak = { ...source!, min: { z1: { r: 0.5, x: 6 }, z0: { r: 0.5, x: 6 } } };
    const faint: Study = { ...study, feeder: { ...study.feeder, sources: [weak] } };
    expect(holdAgainstStudies(faint, asking('short-circuit-ratio'), 30)).toEqual(
      new Set(['short-circuit-ratio']),
    );
  });

  it('with a tie that a second operating case closes, and one-phase inverters on a lateral', () => {
    const { feeder } = study;
    const tied: Study = {
      ...study,
      feeder: {
        ...feeder,
        nodes: [...feeder.nodes, { id: 'side', kv: 12.47, phases: 'B' }],
        lines: [
          ...feeder.lines!,
          {
            id: 'lateral',
            from: 'n60',
            to: 'side',
            phases: 'B',
            km: 0.5,
            z1: { r: 0.3, x: 0.4 },
            z0: { r: 0.6, x: 1.2 },
          },
        ],
        inverters: [
          ...feeder.inverters!,
          { id: 'roof', node: 'side', phases: 'B', kva: 25, faultCurrentPu: 1.2 },
        ],
        switches: [{ id: 'tie', from: 'n40', to: 'n110', closed: false }],
        scenarios: [{ id: 'closed', name: 'tie closed', switches: { tie: true } }],
        devices: feeder.devices!.map((device) => ({ ...device, interruptingKa: 11, testXr: 8 })),
      },
    };
    const bound = holdAgainstStudies(tied, asking('contribution', 'interrupting-duty'), 25);
    expect(bound.size).toBeGreaterThan(0);
  });
});

describe('the search for a size', () => {
  const rule = proFormaRuleSet.rules['interrupting-duty'];
  const limit = { question: 'interrupting-duty', element: 'd' };

  it('finds the size on a straight line in few looks, on the safe side', () => {
    let looks = 0;
    const { kva, bindsAt } = shrink({ kva: 20_000, bindsAt: null }, (size) => {
      looks++;
      return measureRule(rule, 50 + size / 40, limit);
    });
    expect(bindsAt).toEqual(limit);
    expect(kva).toBeLessThanOrEqual(1500);
    expect(kva).toBeGreaterThan(1499.8);
    expect(looks).toBeLessThan(8);
  });

  it('leaves what passes, and gives no room where the smallest fails', () => {
    const free = { kva: 700, bindsAt: null };
    expect(shrink(free, () => measureRule(rule, 87.5, limit))).toBe(free);
    expect(shrink(free, () => measureRule(rule, 87.6, limit))).toEqual({ kva: 0, bindsAt: limit });
  });

  it('finds a step as well as a line', () => {
    const { kva } = shrink({ kva: 20_000, bindsAt: null }, (size) => {
      return { fails: size > 123, beyond: size > 123 ? Infinity : -Infinity, limit };
    });
    expect(kva).toBeGreaterThan(122.9);
    expect(kva).toBeLessThanOrEqual(123);
  });

  it('counts no limit that is only a note, and a strict one as failed at itself', () => {
    const ratio = proFormaRuleSet.rules['short-circuit-ratio'];
    expect(measureRule(ratio, 10, limit).fails).toBe(false);
    expect(measureRule(ratio, 4.9, limit).fails).toBe(true);
    const strict: Rule = { ...rule, limits: [{ limit: 100, comparison: '<', consequence: 'study' }] };
    expect([99, 100].map((value) => measureRule(strict, value, limit).fails)).toEqual([false, true]);
    const note = { id: 'q', verdict: 'outside', consequence: 'note', value: 3, limit: 2, comparison: '<=' };
    expect(measureFindings([note as Finding]).fails).toBe(false);
  });
});
