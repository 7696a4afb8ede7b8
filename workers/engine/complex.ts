/* Complex numbers: single values for the few places that reason, pairs of typed arrays for whole networks. */

export type Complex = { readonly re: number; readonly im: number };

export type ComplexArray = { readonly re: Float64Array; readonly im: Float64Array };

export const zero: Complex = { re: 0, im: 0 };

/** a = 1∠120°, the turn from one phase to the one before it. */
export const a: Complex = { re: -0.5, im: Math.sqrt(3) / 2 };

/** a² = 1∠240°. */
export const a2: Complex = { re: -0.5, im: -Math.sqrt(3) / 2 };

export function polar(magnitude: number, degrees: number): Complex {
  const radians = (degrees * Math.PI) / 180;
  return { re: magnitude * Math.cos(radians), im: magnitude * Math.sin(radians) };
}

export function add(p: Complex, q: Complex): Complex {
  return { re: p.re + q.re, im: p.im + q.im };
}

export function subtract(p: Complex, q: Complex): Complex {
  return { re: p.re - q.re, im: p.im - q.im };
}

export function multiply(p: Complex, q: Complex): Complex {
  return { re: p.re * q.re - p.im * q.im, im: p.re * q.im + p.im * q.re };
}

export function divide(p: Complex, q: Complex): Complex {
  const square = q.re * q.re + q.im * q.im;
  return { re: (p.re * q.re + p.im * q.im) / square, im: (p.im * q.re - p.re * q.im) / square };
}

export function scale(p: Complex, factor: number): Complex {
  return { re: p.re * factor, im: p.im * factor };
}

export function sum(...terms: readonly Complex[]): Complex {
  let re = 0;
  let im = 0;
  for (const term of terms) {
    re += term.re;
    im += term.im;
  }
  return { re, im };
}

export function magnitude(p: Complex): number {
  return Math.sqrt(p.re * p.re + p.im * p.im);
}

export function complexArray(length: number): ComplexArray {
  return { re: new Float64Array(length), im: new Float64Array(length) };
}

export function at(array: ComplexArray, index: number): Complex {
  return { re: array.re[index]!, im: array.im[index]! };
}

export function addAt(array: ComplexArray, index: number, value: Complex): void {
  array.re[index]! += value.re;
  array.im[index]! += value.im;
}
