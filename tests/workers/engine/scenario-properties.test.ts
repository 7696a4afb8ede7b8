import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../../shared/schemas/study-result.ts';
import type { Feeder, Scenario, Study } from '../../../shared/schemas/study.ts';
import { reportNode } from '../../../workers/engine/node-results.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { makeStateSolvers } from '../../../workers/engine/state-solver.ts';
import { readCase } from './cases.ts';
import { randomNetwork } from './random-networks.ts';

/* A scenario must give what the study gives that is edited by hand to be so. */

/** Turns switches and takes out elements, of nodes also what meets them, in the lists themselves. */
function editByHand(study: Study, { switches = {}, out = [] }: Scenario): Study {
  const { feeder } = study;
  const stays = (element: { id: string; node?: string; from?: string; to?: string }) =>
    ![element.id, element.node, element.from, element.to].some((id) => id !== undefined && out.includes(id));
  const lists = Object.entries(feeder).map(([key, list]) => [key, (list as { id: string }[]).filter(stays)]);
  const edited = Object.fromEntries(lists) as Feeder;
  edited.switches = (edited.switches ?? []).map((link) => ({
    ...link,
    closed: switches[link.id] ?? link.closed,
  }));
  const branches = new Set([...(edited.lines ?? []), ...(edited.transformers ?? [])].map(({ id }) => id));
  edited.devices = (feeder.devices ?? []).filter(({ branch }) => branches.has(branch));
  const { sections: _, scenarios: __, ...rest } = edited;
  return { ...study, feeder: rest };
}

function withScenario(study: Study, scenario: Scenario): Study {
  const { sections: _, ...feeder } = study.feeder;
  return { ...study, feeder: { ...feeder, scenarios: [scenario] } };
}

const near = (got: number, expected: number) =>
  Math.abs(got - expected) <= 1e-8 * Math.max(1e-3, Math.abs(expected));

function expectSame(got: unknown, expected: unknown, path: string): void {
  if (typeof got === 'number' && typeof expected === 'number') {
    expect(near(got, expected), `${path}: got ${got}, expected ${expected}`).toBe(true);
  } else if (typeof expected === 'object' && expected !== null && typeof got === 'object' && got !== null) {
    for (const [key, value] of Object.entries(expected)) {
      expectSame((got as Record<string, unknown>)[key], value, `${path}/${key}`);
    }
  } else expect(got, path).toBe(expected);
}

const valueOf = (result: StudyResult, id: string) =>
  result.findings.find((finding) => finding.id === id)?.value ?? null;

/** Says in how many places the scenario was the worse of the two. */
function compareResults(study: Study, scenario: Scenario): number {
  const base = runStudy(withScenario(study, { id: 'same' }), proFormaRuleSet);
  const edited = runStudy(editByHand(study, scenario), proFormaRuleSet);
  const got = runStudy(withScenario(study, scenario), proFormaRuleSet);
  let worse = 0;
  for (const [id, { before, after, worst }] of Object.entries(got.devices)) {
    expectSame({ before, after }, { before: base.devices[id]!.before, after: base.devices[id]!.after }, id);
    const there = edited.devices[id];
    const [most, mostThere] = [
      [before, after],
      [there?.before, there?.after],
    ].map((pair) => Math.max(...pair.map((duty) => duty?.availableA ?? 0))) as [number, number];
    if (mostThere > most * (1 + 1e-7)) {
      const { scenario: named, state, ...duty } = worst!;
      expect(named).toBe(scenario.id);
      expectSame(there![state], duty, `${id} ${state}`);
      expect(near(duty.availableA, mostThere)).toBe(true);
      worse++;
    } else if (mostThere < most * (1 - 1e-7)) expect(worst).toBeUndefined();
  }
  for (const [id, pick] of [
    ['contribution', Math.max],
    ['interrupting-duty', Math.max],
    ['short-circuit-ratio', Math.min],
  ] as const) {
    const values = [valueOf(base, id), valueOf(edited, id)].filter((value) => value !== null);
    const value = valueOf(got, id);
    if (values.length === 0) expect(value, id).toBeNull();
    else if (value !== null) expectSame(value, pick(...values), id);
  }
  return worse;
}

describe.each(['random-11', 'random-12', 'random-13', 'random-14'])('A scenario of %s', (name) => {
  const study = readCase(name);
  const { nodes: _, loads: __, devices: ___, switches = [], ...lists } = study.feeder;
  const everything = Object.values(study.feeder).flat() as { id: string }[];

  it('equals the study edited by hand, for each switch turned and each element out', () => {
    for (const { id, closed } of switches) compareResults(study, { id: 'x', switches: { [id]: !closed } });
    for (const { id } of Object.values(lists).flat() as { id: string }[]) {
      if (everything.filter((each) => each.id === id).length > 1) continue;
      compareResults(study, { id: 'x', out: [id] });
    }
  });
});

/** A random network with switches, a device on each line and a project. */
const randomStudy = fc
  .record({
    study: randomNetwork,
    links: fc.array(fc.record({ from: fc.nat(), to: fc.nat(), closed: fc.boolean() }), { maxLength: 4 }),
    turned: fc.array(fc.boolean(), { minLength: 4, maxLength: 4 }),
    outs: fc.array(fc.nat(), { maxLength: 3 }),
    poi: fc.nat(),
  })
  .map(({ study, links, turned, outs, poi }) => {
    const { feeder } = study;
    const { nodes, lines = [], sources = [], machines = [], inverters = [] } = feeder;
    const nodeAt = (at: number) => nodes[at % nodes.length]!.id;
    const switches = links
      .filter(({ from, to }) => nodeAt(from) !== nodeAt(to))
      .map(({ from, to, closed }, index) => ({
        id: `k${index}`,
        from: nodeAt(from),
        to: nodeAt(to),
        closed,
      }));
    const devices = lines.map(({ id }, index) => {
      const end = index % 2 ? ('from' as const) : ('to' as const);
      return { id: `d-${id}`, branch: id, end, kind: 'breaker', interruptingKa: 10 };
    });
    const candidates = [...lines, ...sources, ...machines, ...inverters];
    const scenario: Scenario = {
      id: 'x',
      switches: Object.fromEntries(switches.map(({ id }, index) => [id, turned[index]!])),
      out: [...new Set(outs.map((at) => candidates[at % candidates.length]!.id))],
    };
    const inverter = { id: 'plant', node: nodeAt(poi), phases: 'ABC', kva: 1500, faultCurrentPu: 1.2 };
    const project = { id: 'project', node: nodeAt(poi), inverters: [inverter] };
    const full: Study = { ...study, feeder: { ...feeder, switches, devices }, project };
    return { study: full, scenario };
  });

describe('On random networks with loops and switches', () => {
  it('a scenario reports what the study edited by hand does', () => {
    let worse = 0;
    fc.assert(
      fc.property(randomStudy, ({ study, scenario }) => {
        worse += compareResults(study, scenario);
      }),
      { numRuns: 60 },
    );
    expect(worse).toBeGreaterThan(10);
  });

  it('every node has the impedances and currents of the study edited by hand, also with nodes out', () => {
    fc.assert(
      fc.property(randomStudy, fc.nat(), ({ study, scenario }, at) => {
        const id = study.feeder.nodes[at % study.feeder.nodes.length]!.id;
        const out = id === study.project!.node ? scenario.out! : [...scenario.out!, id];
        const given = withScenario(study, { ...scenario, out });
        const edited = editByHand(study, { ...scenario, out });
        const model = prepareModel(given);
        const modelEdited = prepareModel(edited);
        const [solver] = makeStateSolvers(given, model).scenarios;
        const { base } = makeStateSolvers(edited, modelEdited);
        for (const state of ['none', 'before', 'after', 'minimum'] as const) {
          for (const node of edited.feeder.nodes) {
            const got = reportNode(solver!.solve(state, 12.47), model.nodeIndex.get(node.id)!);
            const expected = reportNode(base.solve(state, 12.47), modelEdited.nodeIndex.get(node.id)!);
            expectSame(got, expected, `${state} ${node.id}`);
          }
        }
      }),
      { numRuns: 60 },
    );
  });
});
