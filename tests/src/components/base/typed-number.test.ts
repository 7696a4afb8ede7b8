import { describe, expect, it } from 'vitest';
import { readTypedNumber } from '../../../../src/components/base/typed-number.ts';

describe('a typed number', () => {
  it.each([
    ['1250', undefined, 1250],
    ['  1250 ', undefined, 1250],
    ['1,250', undefined, 1250],
    ['12,345,678.5', undefined, 12_345_678.5],
    ['1 250', undefined, 1250],
    ['1\u00a0250', undefined, 1250],
    ['500 kW', 'kW', 500],
    ['500kw', 'kW', 500],
    ['5.75 %', '%', 5.75],
    ['\u22123.5', undefined, -3.5],
    ['.5', undefined, 0.5],
    ['12.', undefined, 12],
    ['0', undefined, 0],
  ])('reads %j with the unit %j as %d', (typed, unit, expected) => {
    expect(readTypedNumber(typed, unit)).toBe(expected);
  });

  it('is undefined when nothing but spaces was typed', () => {
    expect(readTypedNumber('   ')).toBeUndefined();
  });

  it.each(['1,5', '12,47', '1.2.3', 'about 5', '2 MW', '1e3', '-', '1,2345'])(
    'stays the text %j when it cannot be read without guessing',
    (typed) => {
      expect(readTypedNumber(typed, 'kW')).toBe(typed);
    },
  );
});
