import { describe, expect, it } from 'vitest';
import { tieServices } from '../../../shared/rules/service-ties.ts';
import type { Feeder, Inverter, Project } from '../../../shared/schemas/study.ts';
import type { ServiceTransformer } from '../../../shared/schemas/study-utility.ts';

const transformer: ServiceTransformer = {
  ...{ id: 'st', node: 'n', kva: 25, secondaryV: 240, phases: 'B', centreTapped: true },
  usualDrop: { r: 0.02, x: 0.01 },
};
const feederWith = (...serviceTransformers: ServiceTransformer[]): Feeder => ({
  nodes: [],
  serviceTransformers,
});
const roof: Inverter = { id: 'u', node: 'n', phases: 'B', kva: 8, faultCurrentPu: 1.1, ratedKv: 0.416 };
const projectWith = (inverter: Inverter, rest: Partial<Project> = {}): Project => ({
  ...{ id: 'p', node: 'n', inverters: [inverter] },
  ...rest,
});
const tieOf = (feeder: Feeder, project: Project) => tieServices(feeder, project).inverters?.[0]?.service;

describe('A one-phase unit', () => {
  it('is tied to the service transformer at its place, across both halves at 240 V', () => {
    expect(tieOf(feederWith(transformer), projectWith(roof, { panelInterruptingKa: 10 }))).toEqual({
      ...{ transformer: 'st', firstHalfKw: 4, secondHalfKw: 4 },
      ...{ drop: { r: 0.02, x: 0.01 }, panelInterruptingKa: 10 },
    });
  });

  it('of 120 V loads one half alone', () => {
    expect(tieOf(feederWith(transformer), projectWith({ ...roof, ratedKv: 0.208 }))).toMatchObject({
      ...{ firstHalfKw: 8, secondHalfKw: 0 },
    });
  });

  it('says nothing of the halves where its voltage is not known', () => {
    const { ratedKv: _, ...unrated } = roof;
    expect(tieOf(feederWith(transformer), projectWith(unrated))).not.toHaveProperty('firstHalfKw');
  });

  it('stays untied where the records have none or two for its phase, and where it is tied already', () => {
    expect(tieOf(feederWith(), projectWith(roof))).toBeUndefined();
    expect(tieOf(feederWith({ ...transformer, phases: 'A' }), projectWith(roof))).toBeUndefined();
    expect(tieOf(feederWith(transformer, { ...transformer, id: 'x' }), projectWith(roof))).toBeUndefined();
    const own = { transformer: 'other' };
    expect(tieOf(feederWith(transformer), projectWith({ ...roof, service: own }))).toEqual(own);
  });

  it('is the only one that is tied: three-phase plants bring their own', () => {
    expect(
      tieOf(feederWith({ ...transformer, phases: 'ABC' }), projectWith({ ...roof, phases: 'ABC' })),
    ).toBeUndefined();
  });
});
