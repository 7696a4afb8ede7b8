import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { makeNetwork } from '../../../workers/bench/networks.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { withWorkArrays } from '../../../workers/engine/work-arrays.ts';

const length = 5003;

describe('Work arrays', () => {
  it('are used again once they have been given back, and full of zeros then', () => {
    const memory = withWorkArrays((arrays) => {
      const taken = [arrays.floats(length), arrays.integers(length), arrays.bytes(length)];
      for (const array of taken) array.fill(7);
      return taken;
    });
    withWorkArrays((arrays) => {
      const taken = [arrays.floats(length), arrays.integers(length), arrays.bytes(length)];
      expect(taken.every((array, index) => array === memory[index])).toBe(true);
      expect(taken.every((array) => array.every((value) => value === 0))).toBe(true);
    });
  });

  it('are nobody else’s while they are out, also where one use lies within another', () => {
    withWorkArrays((outer) => {
      const own = outer.floats(length);
      withWorkArrays((inner) => {
        const others = [inner.floats(length), inner.floats(length)];
        expect(new Set([own, ...others]).size).toBe(3);
      });
      expect(outer.floats(length)).not.toBe(own);
    });
  });

  it('come back also after an error', () => {
    let taken: Float64Array | undefined;
    const fail = () =>
      withWorkArrays((arrays) => {
        taken = arrays.floats(length);
        throw new Error('in mid-computation');
      });
    expect(fail).toThrow('in mid-computation');
    withWorkArrays((arrays) => expect(arrays.floats(length)).toBe(taken));
  });
});

describe('A study that is run after others', () => {
  it('gives what it gave before, and leaves cases alone that were solved outside', () => {
    const [study, other] = [makeNetwork('ties', 2000), makeNetwork('radial', 3000)];
    const first = JSON.stringify(runStudy(study, proFormaRuleSet));
    const model = prepareModel(study);
    const solved = solveCase(model, choiceOfState('after', study));
    const before = solved.networks.zero.z.im.slice();
    runStudy(other, proFormaRuleSet);
    expect(JSON.stringify(runStudy(study, proFormaRuleSet))).toBe(first);
    expect(solved.networks.zero.z.im).toEqual(before);
  });
});
