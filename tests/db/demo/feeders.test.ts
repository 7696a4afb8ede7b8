import { describe, expect, test } from 'vitest';
import { makeDemoModels } from '../../../db/seeds/demo/feeders.ts';
import type { Feeder } from '../../../shared/schemas/study.ts';
import { studyFormat } from '../../../shared/schemas/study.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';

const models = makeDemoModels();
const feeders = models.map(({ code, content }) => ({ code, feeder: content.feeder }));

function linesOf(feeder: Feeder) {
  return feeder.lines ?? [];
}

describe('the demo models', () => {
  test('made twice are the same to the last byte', () => {
    expect(JSON.stringify(makeDemoModels())).toBe(JSON.stringify(models));
  });

  test('are three buses, five circuits and about 1,200 nodes', () => {
    const buses = feeders.map(
      ({ code, feeder }) => feeder.nodes.find((node) => node.id === `${code}-BUS`)?.kv,
    );
    expect(buses).toEqual([4.16, 12.47, 24.9]);
    expect(feeders.flatMap(({ feeder }) => feeder.circuits?.map((circuit) => circuit.id))).toEqual([
      'MB1',
      'PL1',
      'PL2',
      'HC1',
      'HC2',
    ]);
    const nodes = feeders.reduce((sum, { feeder }) => sum + feeder.nodes.length, 0);
    expect(nodes).toBeGreaterThan(1100);
    expect(nodes).toBeLessThan(1300);
  });

  test.each(models)('$code passes the reader of study files', ({ content }) => {
    const read = readStudy(JSON.stringify({ format: studyFormat, ...content }));
    expect('problems' in read ? read.problems : []).toEqual([]);
  });

  test('lie within the vale, every node of them', () => {
    for (const { id, position } of feeders.flatMap(({ feeder }) => feeder.nodes)) {
      expect(position, id).toBeDefined();
      const [lng, lat] = position ?? [0, 0];
      expect(Math.abs(lat + 34.6), id).toBeLessThan(0.1);
      expect(Math.abs(lng + 24.4), id).toBeLessThan(0.16);
    }
  });

  test.each(feeders)(
    '$code: every line but those in a loop of closed ties has one way back to the bus',
    ({ code, feeder }) => {
      // One line a pole, and each pole is the far end of its own: without the ties the model is a tree.
      const farEnds = linesOf(feeder).map((line) => line.to);
      expect(new Set(farEnds).size).toBe(farEnds.length);
      expect(farEnds).not.toContain(`${code}-BUS`);
      const transformers = feeder.transformers ?? [];
      expect(feeder.nodes.length).toBe(farEnds.length + transformers.length + 1);
    },
  );

  test.each(feeders)(
    '$code: laterals have phases that the line before them has, and ties have all three',
    ({ feeder }) => {
      const phasesAt = new Map(feeder.nodes.map((node) => [node.id, node.phases]));
      for (const line of linesOf(feeder)) {
        for (const phase of line.phases) expect(phasesAt.get(line.from), line.id).toContain(phase);
        expect(phasesAt.get(line.to), line.id).toBe(line.phases);
      }
      for (const { from, to, id } of feeder.switches ?? []) {
        expect([phasesAt.get(from), phasesAt.get(to)], id).toEqual(['ABC', 'ABC']);
      }
      const narrow = linesOf(feeder).filter((line) => line.phases.length < 3).length;
      expect(narrow).toBeGreaterThan(linesOf(feeder).length / 4);
    },
  );

  test('join the two Pellam Cross feeders through one closed tie, and leave the other ties open', () => {
    const ties = feeders.flatMap(({ feeder }) => feeder.switches ?? []);
    expect(
      ties.filter((tie) => tie.closed).map((tie) => [tie.id, tie.from.slice(0, 3), tie.to.slice(0, 3)]),
    ).toEqual([['PL-TIE1', 'PL1', 'PL2']]);
    expect(ties.filter((tie) => !tie.closed)).toHaveLength(2);
  });

  test('have one synchronous machine, the biogas plant on High Corrie, behind a transformer', () => {
    expect(feeders.map(({ feeder }) => feeder.machines?.length)).toEqual([0, 0, 1]);
    const { machines = [], transformers = [] } = feeders[2]!.feeder;
    expect(transformers.find((transformer) => transformer.to === machines[0]?.node)?.connection).toBe('YNd1');
  });

  test.each(feeders)(
    '$code: each section names a device that opens by itself and carries the load beyond it',
    ({ feeder }) => {
      const devices = new Map((feeder.devices ?? []).map((device) => [device.id, device]));
      const heads = new Set((feeder.circuits ?? []).map((circuit) => `${circuit.id}-CB`));
      for (const section of feeder.sections ?? []) {
        expect(devices.get(section.device)?.sectionalizing, section.id).toBe(true);
        const line = linesOf(feeder).find(
          (candidate) => candidate.id === devices.get(section.device)?.branch,
        );
        const beyond = new Set([line?.to]);
        for (const next of linesOf(feeder)) if (beyond.has(next.from)) beyond.add(next.to);
        const loads = (feeder.loads ?? []).filter((load) => beyond.has(load.node));
        expect(section.peakKw).toBeCloseTo(sum(loads.map((load) => load.kw)), -1);
        expect(section.minimumKw).toBeCloseTo(sum(loads.map((load) => load.minimumKw ?? 0)), -1);
        if (heads.has(section.device)) expect(section.peakKw).toBeGreaterThan(2500);
      }
      expect(feeder.sections?.length).toBeGreaterThanOrEqual(heads.size * 2);
    },
  );
});

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
