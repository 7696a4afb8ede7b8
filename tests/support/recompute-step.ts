import { complex, evaluate as evaluateText, type Complex } from 'mathjs';
import { roundValue, significantDigits } from '../../shared/quantity-words.ts';
import type { Quantity, QuantityValue, WorkingStep } from '../../shared/schemas/working.ts';

/* Computes steps of a working again from what is printed of them, as a reader with a calculator would. */

/** Half of the last digit that is printed of a number. */
function halfDigit(value: number): number {
  if (value === 0) return 0;
  return 0.5 * 10 ** (Math.floor(Math.log10(Math.abs(value))) - significantDigits + 1);
}

/** As printed. */
function parts(value: QuantityValue): { re: number; im: number } {
  const rounded = roundValue(value);
  return typeof rounded === 'number' ? { re: rounded, im: 0 } : { re: rounded.re, im: rounded.im };
}

function toScope(value: { re: number; im: number }, isReal: boolean): number | Complex {
  return isReal ? value.re : complex(value.re, value.im);
}

type Evaluated = { re: number; im: number };

function evaluate(formula: string, scope: Record<string, number | Complex>): Evaluated {
  const result = evaluateText(formula, { ...scope }) as number | Complex;
  if (typeof result === 'number') return { re: result, im: 0 };
  if (typeof result !== 'object' || typeof result.re !== 'number') {
    throw new Error(`${formula}: got ${String(result)}, expected a number`);
  }
  return { re: result.re, im: result.im };
}

/** Says what is wrong with a step, nothing where its printed inputs give its printed result within rounding. */
export function findFault(step: WorkingStep): string | undefined {
  if (step.formula === undefined) return undefined;
  const names = step.inputs.map(({ symbol }) => symbol);
  if (new Set(names).size !== names.length) return `${step.formula}: two inputs have one symbol`;
  const values = step.inputs.map(({ value }) => {
    return { ...parts(value), isReal: typeof value === 'number' };
  });
  const scopeOf = (changed?: { index: number; part: 're' | 'im'; by: number }) =>
    Object.fromEntries(
      values.map(({ re, im, isReal }, index) => {
        const moved = { re, im };
        if (changed?.index === index) moved[changed.part] += changed.by;
        return [names[index]!, toScope(moved, isReal)];
      }),
    );
  const base = evaluate(step.formula, scopeOf());
  const spread = { re: 0, im: 0 };
  values.forEach((value, index) => {
    for (const part of ['re', 'im'] as const) {
      const by = halfDigit(value[part]);
      if (by === 0) continue;
      const moved = evaluate(step.formula!, scopeOf({ index, part, by }));
      spread.re += Math.abs(moved.re - base.re);
      spread.im += Math.abs(moved.im - base.im);
    }
  });
  return compare(step, base, spread);
}

/** Twice the first-order spread leaves room for what is of second order, and no more. */
function compare({ formula, result }: WorkingStep, base: Evaluated, spread: Evaluated): string | undefined {
  const expected = parts(result.value);
  for (const part of ['re', 'im'] as const) {
    const room = 2 * spread[part] + halfDigit(expected[part]) + 1e-9 * Math.hypot(base.re, base.im);
    if (Math.abs(base[part] - expected[part]) > room) {
      return `${result.symbol} = ${formula}: got ${base[part]}, expected ${expected[part]} within ${room}`;
    }
  }
  return undefined;
}

/** The faults of all steps; also inputs that a later step has with another value than the step that gave them. */
export function listFaults(steps: readonly WorkingStep[]): string[] {
  const given = new Map<string, Quantity>();
  return steps.flatMap((step) => {
    const changed = step.inputs.filter(({ symbol, value }) => {
      const before = given.get(symbol);
      return before !== undefined && JSON.stringify(before.value) !== JSON.stringify(value);
    });
    given.set(step.result.symbol, step.result);
    const faults = changed.map(({ symbol }) => `${symbol} has another value than where it was given`);
    const wrong = findFault(step);
    return wrong === undefined ? faults : [...faults, wrong];
  });
}
