import type { Quantity, QuantityValue, WorkingStep } from '../../shared/schemas/working.ts';

/**
 * Writes down the steps that lead to an answer, in the order in which they are taken. The engine's own value goes into a
 * step beside the formula; nothing here evaluates it, so that formula and value check each other.
 */
export class Working {
  readonly #steps: WorkingStep[] = [];

  get steps(): readonly WorkingStep[] {
    return this.#steps;
  }

  /** A number that is taken from the study, the rule set or a part of the sheet that shows how it came about. */
  given(symbol: string, words: string, value: QuantityValue, unit: string): Quantity {
    const result = { symbol, words, value, unit };
    this.#steps.push({ words, result, inputs: [] });
    return result;
  }

  /** A number that follows from others: `formula` is written in the symbols of `inputs`. */
  compute(
    { symbol, words, unit }: { symbol: string; words: string; unit: string },
    formula: string,
    inputs: readonly Quantity[],
    value: QuantityValue,
  ): Quantity {
    const result = { symbol, words, value, unit };
    this.#steps.push({ words, result, formula, inputs });
    return result;
  }
}
