import { describe, expect, it } from 'vitest';
import { describeFinding, summariseFindings } from '../../shared/finding-words.ts';
import type { Finding } from '../../shared/schemas/findings.ts';

const duty: Finding = {
  id: 'interrupting-duty',
  question: 'Does everything that interrupts faults keep its margin?',
  verdict: 'within',
  value: 71.234,
  before: 65.08,
  comparison: '<=',
  limit: 87.5,
  unit: '%',
  consequence: 'none',
  source: 'SGIP 2.2.1.5',
};

describe('describeFinding', () => {
  it('prints value, value before and limit with the same decimals and their unit', () => {
    expect(describeFinding(duty)).toMatchObject({
      value: '71.2\u00a0%',
      before: '65.1\u00a0%',
      limit: 'at most 87.5\u00a0%',
      verdict: 'Within the limit',
      sentence: 'Within the limit: 71.2\u00a0%, where the limit is at most 87.5\u00a0%.',
    });
  });

  it('takes as many decimals as it needs to tell a value from a limit that it breaks by a little', () => {
    const close = describeFinding({ ...duty, verdict: 'outside', value: 87.5004 });
    expect(close).toMatchObject({ value: '87.5004\u00a0%', limit: 'at most 87.5000\u00a0%' });
  });

  it('never prints 87.51 as 87.5, nor 87.4999 as the limit', () => {
    const say = (value: number) => describeFinding({ ...duty, verdict: 'outside', value });
    expect(say(87.51)).toMatchObject({ value: '87.51\u00a0%', limit: 'at most 87.50\u00a0%' });
    expect(say(87.4999)).toMatchObject({ value: '87.4999\u00a0%', limit: 'at most 87.5000\u00a0%' });
    expect(say(87.5).value).toBe('87.5\u00a0%');
  });

  it('names the side of the limit', () => {
    expect(describeFinding({ ...duty, comparison: '<' }).limit).toBe('less than 87.5\u00a0%');
    expect(describeFinding({ ...duty, comparison: '>=', unit: '' }).limit).toBe('at least 87.50');
  });

  it('prints whole amperes', () => {
    expect(describeFinding({ ...duty, unit: 'A', value: 12_470.6, limit: 12_500 }).value).toBe(
      '12,471\u00a0A',
    );
  });

  it('answers a question without numbers with yes or no', () => {
    const table: Finding = {
      ...duty,
      value: null,
      limit: null,
      before: undefined,
      unit: '',
      note: 'Dyn1 on a three-wire line.',
    };
    expect(describeFinding(table)).toMatchObject({
      value: 'Yes',
      limit: 'Yes',
      before: null,
      isYesOrNo: true,
    });
    expect(describeFinding({ ...table, verdict: 'outside' })).toMatchObject({
      value: 'No',
      sentence: 'No: Dyn1 on a three-wire line.',
    });
  });

  it('never prints a value that is missing as a number', () => {
    const missing: Finding = {
      ...duty,
      verdict: 'needs-data',
      value: null,
      note: 'Its rating is not known.',
    };
    expect(describeFinding(missing)).toMatchObject({
      value: 'Not evaluated',
      limit: 'at most 87.5\u00a0%',
      isYesOrNo: false,
      sentence: 'Needs data: Its rating is not known.',
    });
    expect(describeFinding({ ...missing, limit: null }).limit).toBe('No limit set');
    expect(describeFinding({ ...missing, verdict: 'not-applicable', note: undefined }).sentence).toBe(
      'Does not apply.',
    );
  });
});

it('says of a whole screening how many are within, outside and without data', () => {
  const all = [duty, duty, { ...duty, verdict: 'outside' }, { ...duty, verdict: 'needs-data' }] as Finding[];
  expect(summariseFindings(all)).toBe('2 of 4 findings are within their limit; 1 is outside, 1 needs data.');
});
