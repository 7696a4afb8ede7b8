import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { Project, Study } from '../../../../shared/schemas/study.ts';
import {
  choiceOfIsland,
  cutOutIslands,
  seeFromPoi,
} from '../../../../workers/engine/findings/island-network.ts';
import { listIslands } from '../../../../workers/engine/findings/islands.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import { findFaultPoint, solveCase } from '../../../../workers/engine/solve-case.ts';
import { readCase } from '../cases.ts';

const cases = ['marrow-lane', 'fallow-bridge', 'random-12', 'random-13'];

describe('The network of an island', () => {
  it.each(cases)('taken out of %s shows what the whole network with the device open does', (name) => {
    const study = readCase(name) as Study & { project: Project };
    // Every line on the way has a device at each end, so that all there is to open is opened.
    study.feeder.devices = (study.feeder.lines ?? []).flatMap(({ id }) =>
      (['from', 'to'] as const).map((end) => {
        return { id: `${id}-${end}`, branch: id, end, kind: 'recloser', interruptingKa: 50 };
      }),
    );
    delete study.feeder.sections;
    const screening = makeScreening(study, proFormaRuleSet);
    let compared = 0;
    for (const ofCase of listIslands(screening)) {
      const network = cutOutIslands(screening, ofCase);
      if (!network) continue;
      for (const project of [true, false]) {
        const given = { machines: 'all', project, companions: true } as const;
        const seen = seeFromPoi(network, given);
        ofCase.islands.forEach(({ opening }, place) => {
          const choice = { ...choiceOfIsland(network, given), opened: [opening] };
          const point = findFaultPoint(solveCase(screening.model, choice), screening.poi);
          expect(seen[place] === undefined).toBe(point === undefined);
          if (!point) return;
          compared += 1;
          for (const key of ['z1', 'z2', 'z0'] as const) {
            const [expected, got] = [point[key], seen[place]![key]];
            expect(got === null).toBe(expected === null);
            expect(got?.re ?? 0).toBeCloseTo(expected?.re ?? 0, 9);
            expect(got?.im ?? 0).toBeCloseTo(expected?.im ?? 0, 9);
          }
        });
      }
    }
    expect(compared).toBeGreaterThan(0);
  });
});
