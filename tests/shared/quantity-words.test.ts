import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  formatSignificant,
  formatValue,
  printFormula,
  printSymbol,
  roundValue,
} from '../../shared/quantity-words.ts';

const joined = (formula: string) =>
  printFormula(formula)
    .map(({ text, place }) => ({ line: text, below: `[${text}]`, above: `<${text}>` })[place])
    .join('');

describe('A printed quantity', () => {
  it('has six digits that count, fewer where it needs fewer, and thousands apart', () => {
    expect(formatSignificant(4629.9234)).toBe('4,629.92');
    expect(formatSignificant(0.0929078)).toBe('0.0929078');
    expect(formatSignificant(0.11 + 1e-16)).toBe('0.110000');
    expect(formatSignificant(12.47)).toBe('12.47');
    expect(formatSignificant(1234567.8)).toBe('1,234,570');
    expect(formatSignificant(-3)).toBe('\u22123');
    expect(formatSignificant(0)).toBe('0');
    expect(formatSignificant(1.23456e-7)).toBe('1.23456·10^\u22127');
  });

  it('reads back as the number that a reader computes with', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true, min: 1e-12, max: 1e12 }), (value) => {
        const text = formatSignificant(value).replaceAll(',', '').replace('\u2212', '-').replace('·10^', 'e');
        expect(Number(text)).toBe(roundValue(value));
      }),
    );
  });

  it('shows a complex number with j, and no part that is left of rounding', () => {
    expect(formatValue({ re: 0.5, im: -0.25 }, 'pu')).toBe('0.5 \u2212 j0.25\u00a0pu');
    expect(formatValue({ re: 6e-17, im: 0.11 }, '')).toBe('0 + j0.11');
    expect(roundValue({ re: 6e-17, im: 0.11 })).toEqual({ re: 0, im: 0.11 });
  });
});

describe('A printed formula', () => {
  it('has a dot for the product, indices below the line, powers above it, and j', () => {
    expect(joined('sqrt(3)*abs(V/(Z1 + Z_up_2))')).toBe('√(3)·abs(V/(Z[1] + Z[up.2]))');
    expect(joined('a^2*I1 - i*x_0')).toBe('a<2>·I[1] \u2212 j·x[0]');
    expect(joined('exp(i*atan(q_3))')).toBe('exp(j·atan(q[3]))');
  });

  it('sets a symbol without digits as it is', () => {
    expect(printSymbol('E')).toEqual([{ text: 'E', place: 'line' }]);
    expect(printSymbol('Z1_up')).toEqual([
      { text: 'Z', place: 'line' },
      { text: '1,up', place: 'below' },
    ]);
  });
});
