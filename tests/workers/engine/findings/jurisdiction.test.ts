import { describe, expect, it } from 'vitest';
import { ask, study } from './screen-studies.ts';

describe('Whether the rules apply to the circuit', () => {
  it.each([
    [true, 'within', 'none'],
    [false, 'outside', 'study'],
    [undefined, 'needs-data', 'study'],
  ] as const)('is what the model says: %s', (subjectToRules, verdict, consequence) => {
    const file = study(({ feeder }) => {
      if (subjectToRules !== undefined) feeder.circuits![0]!.subjectToRules = subjectToRules;
    });
    expect(ask(file, 'jurisdiction')).toMatchObject([{ element: 'ML-1', verdict, consequence, value: null }]);
  });

  it('is asked of the circuit that the lines to the place name', () => {
    const file = study(({ feeder }) => {
      feeder.circuits![0]!.subjectToRules = false;
      feeder.circuits!.push({ id: 'ML-2', lineType: 'four-wire', subjectToRules: true });
      feeder.lines![1]!.circuit = 'ML-2';
    });
    expect(ask(file, 'jurisdiction')).toMatchObject([{ element: 'ML-2', verdict: 'within' }]);
  });

  it('needs data where no circuit is known', () => {
    const file = study(({ feeder }) => delete feeder.circuits);
    expect(ask(file, 'jurisdiction')).toMatchObject([{ element: 'poi', verdict: 'needs-data' }]);
  });
});
