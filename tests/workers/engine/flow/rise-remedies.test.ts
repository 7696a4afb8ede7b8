import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import { findExportForRise, findPowerFactorForRise } from '../../../../workers/engine/flow/rise-remedies.ts';
import { ask } from '../findings/island-studies.ts';
import { voltageStudy } from '../findings/voltage-studies.ts';

const plant = (kva: number, setting: { powerFactor?: number; exportKw?: number } = {}) =>
  voltageStudy(({ project }) => Object.assign(project.inverters![0]!, { kva, ...setting }));

const riseOf = (study: ProjectStudy) => ask(study, ['steady-voltage'])[0]!.value!;
const screeningOf = (study: ProjectStudy) => makeScreening(study, proFormaRuleSet);

describe('What brings the rise within its limit', () => {
  it('is the power factor nearest to unity at which it is', () => {
    expect(riseOf(plant(5000))).toBeGreaterThan(3);
    const powerFactor = findPowerFactorForRise(screeningOf(plant(5000)), 3)!;
    expect(powerFactor).toBeGreaterThan(-1);
    expect(powerFactor).toBeLessThanOrEqual(-0.85);
    expect(riseOf(plant(5000, { powerFactor }))).toBeLessThanOrEqual(3);
    expect(riseOf(plant(5000, { powerFactor: powerFactor - 0.01 }))).toBeGreaterThan(3);
  });

  it('is none where unity is good enough, and none to be had where 0.85 is not', () => {
    expect(findPowerFactorForRise(screeningOf(plant(2000)), 3)).toBe(1);
    expect(findPowerFactorForRise(screeningOf(plant(5000)), -5)).toBeUndefined();
  });

  it('is the largest export in whole kilowatts at which it is', () => {
    const exportKw = findExportForRise(screeningOf(plant(5000)), 3)!;
    expect(riseOf(plant(5000, { exportKw }))).toBeLessThanOrEqual(3);
    expect(riseOf(plant(5000, { exportKw: exportKw + 1 }))).toBeGreaterThan(3);
    expect(findExportForRise(screeningOf(plant(2000)), 3)).toBe(2000);
    expect(findExportForRise(screeningOf(plant(2000)), -1)).toBeUndefined();
  });

  it('is not to be had where no load flow can be made', () => {
    const study = voltageStudy(({ feeder }) => delete feeder.loads![0]!.minimumKw);
    expect(findPowerFactorForRise(screeningOf(study), 3)).toBeUndefined();
    expect(findExportForRise(screeningOf(study), 3)).toBeUndefined();
  });
});
