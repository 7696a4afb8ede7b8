/*
 * The working of an answer as data: steps that a reader can follow with a pocket calculator. A formula is written in the
 * symbols of its inputs, with + - * / ^, parentheses, i for the imaginary unit and sqrt, abs, re, im, arg, conj, exp, log,
 * sin, cos, tan, atan, acos, max, min; angles are in radians. Evaluated on the inputs as printed, it gives the result as
 * printed, but for rounding.
 */

/** A real number, or a complex one by its parts. */
export type QuantityValue = number | { readonly re: number; readonly im: number };

/** A number with its name: of the inputs of a step, or what it gives. */
export type Quantity = {
  /** A name that a formula can use: letters, digits and _, a letter first. "Z1", "I_after". */
  readonly symbol: string;
  /** What it is and where it comes from, in plain words. */
  readonly words: string;
  readonly value: QuantityValue;
  /** "" for a number without one. */
  readonly unit: string;
};

/** One line of the working: what is given has no formula, what is computed has one and names all inputs of it. */
export type WorkingStep = {
  readonly words: string;
  readonly result: Quantity;
  readonly formula?: string;
  readonly inputs: readonly Quantity[];
};
