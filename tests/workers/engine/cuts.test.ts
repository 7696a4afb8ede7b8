import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findCutOff, traceCuts, traceUpstream } from '../../../workers/engine/findings/upstream.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { randomNetwork } from './random-networks.ts';

describe('What opening each branch on the way to the source cuts off', () => {
  it('is found in one walk as by a walk for each branch', () => {
    let cutsSeen = 0;
    fc.assert(
      fc.property(randomNetwork, fc.nat(), (study, at) => {
        const model = prepareModel(study);
        const node = at % study.feeder.nodes.length;
        const upstream = traceUpstream(model, choiceOfState('after', study), node);
        const { isCut, since } = traceCuts(upstream);
        upstream.branches.forEach((branch, place) => {
          const area = findCutOff(upstream, node, branch);
          expect(isCut[place] === 1).toBe(area !== undefined);
          if (!area) return;
          cutsSeen++;
          const together = Array.from(since, (first) => (first !== -1 && first <= place ? 1 : 0));
          expect(together).toEqual([...area]);
        });
      }),
      { numRuns: 200 },
    );
    expect(cutsSeen).toBeGreaterThan(20);
  });
});
