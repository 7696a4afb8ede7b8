import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawLimitLine } from '../../../shared/drawings/limit-line.ts';

const duty = { comparison: '<=', unit: '%' } as const;

describe('the limit line', () => {
  it('puts limit, value and value before on one true scale when they are near each other', () => {
    const line = drawLimitLine({ ...duty, value: 50, before: 25, limit: 100 });
    expect(line.breakAt).toBeNull();
    expect(line.valueAt).toBeCloseTo((line.limitAt ?? 0) / 2, 10);
    expect(line.beforeAt).toBeCloseTo((line.limitAt ?? 0) / 4, 10);
  });

  it('puts the value on the limit and within it when both are equal and the limit may be met', () => {
    const line = drawLimitLine({ ...duty, value: 87.5, limit: 87.5 });
    expect(line.valueAt).toBe(line.limitAt);
    expect(line.meets).toBe(true);
    expect(line.sentence).toBe('87.5\u00a0% against at most 87.5\u00a0%, within the limit.');
  });

  it('is outside when both are equal and the value must stay below', () => {
    expect(drawLimitLine({ value: 10, limit: 10, comparison: '<', unit: 'kA' }).meets).toBe(false);
    expect(drawLimitLine({ value: 10, limit: 10, comparison: '>', unit: 'kA' }).meets).toBe(false);
    expect(drawLimitLine({ value: 10, limit: 10, comparison: '>=', unit: 'kA' }).meets).toBe(true);
  });

  it('prints as many decimals as tell the value from the limit', () => {
    const line = drawLimitLine({ ...duty, value: 87.5004, before: 80, limit: 87.5 });
    expect(line.valueText).toBe('87.5004\u00a0%');
    expect(line.limitText).toBe('at most 87.5000\u00a0%');
    expect(line.meets).toBe(false);
  });

  it('hatches the right side for an upper limit and the left side for a lower one', () => {
    const upper = drawLimitLine({ ...duty, value: 5, limit: 10 });
    expect(upper.beyond).toEqual({ from: upper.limitAt, to: 100 });
    const lower = drawLimitLine({ value: 5, limit: 10, comparison: '>=', unit: '' });
    expect(lower.beyond).toEqual({ from: 0, to: lower.limitAt });
  });

  it('breaks the line when a value lies far beyond, and says so', () => {
    const line = drawLimitLine({ ...duty, value: 612, before: 10, limit: 100 });
    expect(line.breakAt).not.toBeNull();
    expect(line.valueAt).toBeGreaterThan(line.breakAt ?? 100);
    expect(line.limitAt).toBeLessThan(line.breakAt ?? 0);
    expect(line.beforeAt).toBeCloseTo((line.limitAt ?? 0) / 10, 10);
    expect(line.sentence).toContain('The line is broken');
  });

  it('says "Not evaluated" and still draws the limit when there is no value', () => {
    const line = drawLimitLine({ ...duty, value: null, limit: 10 });
    expect(line).toMatchObject({ valueAt: null, meets: null, valueText: 'Not evaluated' });
    expect(line.limitAt).toBeGreaterThan(0);
    expect(line.sentence).toBe('Not evaluated against at most 10.0\u00a0%.');
  });

  it('draws the value without a limit or a verdict when none is set', () => {
    const line = drawLimitLine({ ...duty, value: 4, limit: null });
    expect(line).toMatchObject({ limitAt: null, beyond: null, meets: null });
    expect(line.sentence).toBe('4.0\u00a0%; no limit is set.');
  });

  it('keeps every mark on the line and in its order, whatever the numbers', () => {
    const amount = fc.double({ min: 0, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(amount, amount, amount, (value, before, limit) => {
        const { valueAt, beforeAt, limitAt } = drawLimitLine({ ...duty, value, before, limit });
        const marks = [
          { amount: value, at: valueAt as number },
          { amount: before, at: beforeAt as number },
          { amount: limit, at: limitAt as number },
        ].sort((first, second) => first.amount - second.amount);
        for (const { at } of marks) expect(at >= 0 && at <= 100).toBe(true);
        expect(marks[0]!.at).toBeLessThanOrEqual(marks[1]!.at);
        expect(marks[1]!.at).toBeLessThanOrEqual(marks[2]!.at);
      }),
    );
  });
});
