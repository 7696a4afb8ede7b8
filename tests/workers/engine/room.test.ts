import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Finding } from '../../../shared/schemas/findings.ts';
import type { RoomNode } from '../../../shared/schemas/rooms.ts';
import type { Rule, RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Line, Load, Project, Study } from '../../../shared/schemas/study.ts';
import type { Regulator, Substation } from '../../../shared/schemas/study-utility.ts';
import { makeLoadedNetwork } from '../../../workers/bench/room.ts';
import { makeInverterProject, makeMachineProject } from '../../../workers/engine/room/plants.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { solveTwoNode } from '../../../workers/engine/flow/two-node.ts';
import { findRoom } from '../../../workers/engine/room/room.ts';
import { measureFindings, measureRule, shrink } from '../../../workers/engine/room/sizes.ts';
import { findFirstChange } from '../../../workers/engine/room/voltage-change.ts';
import { screenStudy } from '../../../workers/engine/trials.ts';

/** Where power flows back is told of the size of a plant without a number too, and what is known is counted where more is not. */
const isOfFlow = (id: string) => id === 'reverse-flow';

/** Findings of a whole study that room counts: not of what lacks data there, and not of the kind of plant alone. */
function countedFailures(study: Study, project: Project, ruleSet: RuleSet, counted: string[]): Finding[] {
  const screened = screenStudy({ ...study, project }, ruleSet);
  if ('problems' in screened) throw new Error('The findings hold what is no number');
  return screened.findings.filter(
    ({ id, verdict, value, consequence }) =>
      counted.includes(id) &&
      verdict === 'outside' &&
      (value !== null || isOfFlow(id)) &&
      consequence !== 'note',
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
          .filter(({ id }) => isOfFlow(id) || !node.lacking.includes(id))
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

/** Ratings of lines and bank, loads with their minimum, of which some are on one phase, and a bank behind the source. */
function makeRatedNetwork(substation: Partial<Substation>): Study {
  const { feeder } = study;
  const lines = feeder.lines!.map((line, index) => ({ ...line, ampacityA: 300 + 10 * (index % 23) }));
  const loads: Load[] = Array.from({ length: 30 }, (_, index) => ({
    id: `load${index}`,
    node: `n${4 * index + 3}`,
    phases: index % 5 === 0 ? 'B' : 'ABC',
    kw: 90 + index,
    kvar: 30,
    minimumKw: 30 + index,
  }));
  const bank = { id: 'bank', kva: 9000, ...substation };
  return { ...study, feeder: { ...feeder, lines, loads, substations: [bank] } };
}

describe('against whole studies where a formula gives the size', () => {
  it('by the change when all of it trips, on grids where the voltage rises or falls, with a tie closed too', () => {
    const [source] = study.feeder.sources!;
    const scenarios = [{ id: 'closed', name: 'tie closed', switches: { tie: true } }];
    const switches = [{ id: 'tie', from: 'n40', to: 'n110', closed: false }];
    // The voltage rises with much resistance; with little it falls more than it rises.
    for (const z1 of [
      { r: 2, x: 4 },
      { r: 0.05, x: 6 },
    ]) {
      const sources = [{ ...source!, min: { z1, z0: { r: 0.5, x: 6 } } }];
      const weak: Study = { ...study, feeder: { ...study.feeder, sources, scenarios, switches } };
      const bound = holdAgainstStudies(weak, asking('rapid-voltage-change'), 24);
      expect(bound).toEqual(new Set(['rapid-voltage-change']));
    }
  });

  it('by what flows back through lines and bank, with unbalanced load', () => {
    const rated = makeRatedNetwork({ reverseFlow: true });
    const rules = asking('reverse-flow');
    expect(holdAgainstStudies(rated, rules, 12)).toEqual(new Set(['reverse-flow']));
    const { nodes } = findRoom(rated, rules);
    expect(new Set(nodes.map(({ inverters }) => inverters.bindsAt?.element)).size).toBeGreaterThan(5);
    // The source itself has no line on its way.
    expect(nodes.filter(({ lacking }) => lacking.length > 0).map(({ node }) => node)).toEqual(['n0']);
    const small = makeRatedNetwork({ reverseFlow: true, kva: 1500 });
    const bound = findRoom(small, rules).nodes.slice(1);
    expect(new Set(bound.map(({ machine }) => machine.bindsAt?.element))).toEqual(new Set(['bank']));
    holdAgainstStudies(small, rules, 40);
  });

  it('by a bank and a regulator through which nothing may flow back', () => {
    const barred = makeRatedNetwork({ reverseFlow: false });
    const line = barred.feeder.lines!.at(-1)!;
    const regulators: Regulator[] = [
      {
        ...{ id: 'vr', branch: line.id, end: 'to', phases: 'ABC', reverse: 'locked' },
        ...{ setVoltagePu: 1, bandwidthPu: 0.02 },
      },
    ];
    const both: Study = { ...barred, feeder: { ...barred.feeder, regulators } };
    const rules = asking('reverse-flow');
    holdAgainstStudies(both, rules, 7);
    const elements = findRoom(both, rules).nodes.map(({ inverters }) => inverters.bindsAt?.element);
    expect(elements[119]).toBe('vr');
    expect(elements.filter((element) => element === 'bank').length).toBeGreaterThan(50);
  });

  it('by the worse of two ways when a second operating case feeds part of it from elsewhere', () => {
    const rated = makeRatedNetwork({ reverseFlow: true });
    const switches = [{ id: 'tie', from: 'n40', to: 'n110', closed: false }];
    const scenarios = [{ id: 'moved', name: 'moved', out: ['l110'], switches: { tie: true } }];
    const moved: Study = { ...rated, feeder: { ...rated.feeder, switches, scenarios } };
    const rules = asking('reverse-flow');
    holdAgainstStudies(moved, rules, 11);
    const kvaOf = (given: Study) => findRoom(given, rules).nodes.map(({ inverters }) => inverters.kva);
    const [before, after] = [kvaOf(rated), kvaOf(moved)];
    expect(after.every((kva, index) => kva <= before[index]! * 1.0002)).toBe(true);
    expect(after.some((kva, index) => kva < before[index]! * 0.99)).toBe(true);
  });

  it('counts what is known, and says where data lack: no rating, no minimum, no permission, a loop', () => {
    const rules = asking('reverse-flow');
    const lackingOf = (given: Study) => {
      holdAgainstStudies(given, rules, 35);
      return findRoom(given, rules).nodes.filter(({ lacking }) => lacking.includes('reverse-flow')).length;
    };
    const rated = makeRatedNetwork({ reverseFlow: true });
    const unrated = rated.feeder.lines!.map((line) =>
      line.from === 'n0' ? { ...line, ampacityA: undefined } : line,
    );
    expect(lackingOf({ ...rated, feeder: { ...rated.feeder, lines: unrated as Line[] } })).toBe(120);
    expect(lackingOf(makeRatedNetwork({}))).toBe(120);
    const [load, ...known] = rated.feeder.loads!.toReversed();
    const loads = [...known, { ...load!, minimumKw: undefined } as Load];
    expect(lackingOf({ ...rated, feeder: { ...rated.feeder, loads } })).toBeGreaterThan(1);
    const tie = { id: 'tie', from: 'n40', to: 'n110', closed: true };
    const looped = lackingOf({ ...rated, feeder: { ...rated.feeder, switches: [tie] } });
    expect(looped).toBeGreaterThan(1);
    expect(looped).toBeLessThan(120);
  });
});

describe('the first change of a voltage', () => {
  const volts = (z: Complex, p: number) => solveTwoNode(z, p, 0);

  it('is the size at which two nodes change by as much, up or down', () => {
    for (const [z, change] of [
      [{ re: 0.08, im: 0.16 }, 0.03],
      [{ re: 0.002, im: 0.2 }, 0.03],
      [{ re: 0.05, im: 0 }, 0.05],
    ] as const) {
      expect(Math.abs(volts(z, findFirstChange(z, change))! - 1)).toBeCloseTo(change, 10);
    }
  });

  it('is the rise where a fall follows, and where the voltage is lost before it falls as far', () => {
    const rising = { re: 0.05, im: 0.2 };
    const rise = findFirstChange(rising, 0.03);
    expect(volts(rising, rise)).toBeCloseTo(1.03, 10);
    expect(volts(rising, 2 * rise)).toBeLessThan(1.03);
    const faint = { re: 0, im: 0.25 };
    const lost = findFirstChange(faint, 0.4);
    expect(lost).toBeCloseTo(2, 10);
    expect(volts(faint, lost * 1.0001)).toBeUndefined();
    expect(volts(faint, lost * 0.9999)).toBeGreaterThan(0.7);
    expect(findFirstChange({ re: 0, im: 0 }, 0.03)).toBe(Infinity);
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
