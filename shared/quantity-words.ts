import type { Quantity, QuantityValue, WorkingStep } from './schemas/working.ts';

/* How numbers and formulas of a working are printed, on screen and paper alike. */

/** Digits that count; a reader who computes with them gets the next result as printed, but for rounding. */
export const significantDigits = 6;

const noBreak = '\u00a0';
const minus = '\u2212';

/** "4,629.92", "0.0929078", "1.23457·10^−7", with a real minus; a whole number has no decimals. */
export function formatSignificant(value: number): string {
  return printReal(value).replaceAll('-', minus);
}

/** A part of a complex number this much smaller than the other is left of rounding, and printed as 0. */
const negligible = 1e-9;

/** A value as it is printed, to compute with. */
export function roundValue(value: QuantityValue): QuantityValue {
  if (typeof value === 'number') return roundSignificant(value);
  const { re, im } = value;
  const isRest = (part: number, other: number) => Math.abs(part) < negligible * Math.abs(other);
  return {
    re: isRest(re, im) ? 0 : roundSignificant(re),
    im: isRest(im, re) ? 0 : roundSignificant(im),
  };
}

function roundSignificant(value: number): number {
  return Number(value.toPrecision(significantDigits));
}

/** Digits that a number has when it is written out. */
function countDigits(value: number): number {
  return String(Math.abs(value)).replace(/e.*$/, '').replace('.', '').replace(/^0+/, '').length;
}

function printReal(value: number): string {
  if (!Number.isFinite(value)) return String(value);
  const rounded = roundSignificant(value);
  const size = Math.abs(rounded);
  if (size !== 0 && (size < 1e-4 || size >= 1e9)) return printScientific(rounded);
  // What needs fewer digits is told without zeros: 12.47 kV, 0.5 km.
  if (countDigits(value) <= significantDigits) return group(String(value));
  const power = Math.floor(Math.log10(size));
  return group(rounded.toFixed(Math.max(0, significantDigits - 1 - power)));
}

function printScientific(value: number): string {
  const [digits, exponent] = value.toExponential(significantDigits - 1).split('e') as [string, string];
  return `${digits}·10^${Number(exponent)}`;
}

function group(text: string): string {
  const [whole, decimals] = text.split('.') as [string, string | undefined];
  const grouped = whole.replace(/\B(?=(\d{3})+(?!\d))/g, ',');
  return decimals === undefined ? grouped : `${grouped}.${decimals}`;
}

/** A value with its unit; a complex one as "0.12 + j0.34". */
export function formatValue(value: QuantityValue, unit: string): string {
  const number = typeof value === 'number' ? formatSignificant(value) : formatComplex(value);
  if (unit === '') return number;
  return `${number}${noBreak}${unit}`;
}

function formatComplex(value: { re: number; im: number }): string {
  const rounded = roundValue(value) as { re: number; im: number };
  const re = rounded.re === 0 ? 0 : value.re;
  const im = rounded.im === 0 ? 0 : value.im;
  const sign = im < 0 ? minus : '+';
  return `${formatSignificant(re)} ${sign} j${formatSignificant(Math.abs(im))}`;
}

/** Part of a formula or a symbol: plain, or set lower as an index or higher as a power. */
export type FormulaPiece = { text: string; place: 'line' | 'below' | 'above' };

/** "Z1_up" as Z with the index 1,up; "I0" as I with 0. */
export function printSymbol(symbol: string): FormulaPiece[] {
  const [, letters, digits, rest] = /^([A-Za-z]+)(\d*)(?:_(.*))?$/.exec(symbol) ?? [];
  if (letters === undefined) return [{ text: symbol, place: 'line' }];
  const below = [digits, rest?.replaceAll('_', '.')].filter(Boolean).join(',');
  const line: FormulaPiece = { text: letters, place: 'line' };
  return below === '' ? [line] : [line, { text: below, place: 'below' }];
}

/** Names of functions and the imaginary unit stay as they are; i is printed j, as engineers write it. */
const functions = new Set('sqrt abs re im arg conj exp log sin cos tan atan acos max min'.split(' '));

/** A formula as it is printed: · for *, indices below the line, powers above it. */
export function printFormula(formula: string): FormulaPiece[] {
  const pieces: FormulaPiece[] = [];
  const put = (text: string, place: FormulaPiece['place'] = 'line') => {
    const last = pieces.at(-1);
    if (last?.place === place) last.text += text;
    else pieces.push({ text, place });
  };
  const tokens = formula.match(/[A-Za-z]\w*|[\d.]+(?:[eE][+-]?\d+)?|\^-?[\d.]+|\S|\s+/g) ?? [];
  for (const token of tokens) {
    if (token === '*') put('·');
    else if (token === '-') put(minus);
    else if (token === 'i') put('j');
    else if (token.startsWith('^') && token.length > 1) put(token.slice(1).replace('-', minus), 'above');
    else if (!/^[A-Za-z]/.test(token) || functions.has(token)) put(token === 'sqrt' ? '√' : token);
    else for (const { text, place } of printSymbol(token)) put(text, place);
  }
  return pieces;
}

/** A step as a reader takes it in: what it is, its formula, what stands in it, and what it gives. */
export type PrintedStep = {
  words: string;
  symbol: FormulaPiece[];
  /** Nothing for a number that is given. */
  formula: FormulaPiece[] | null;
  inputs: { symbol: FormulaPiece[]; value: string; words: string }[];
  result: string;
};

export function printStep({ words, result, formula, inputs }: WorkingStep): PrintedStep {
  return {
    words,
    symbol: printSymbol(result.symbol),
    formula: formula === undefined ? null : printFormula(formula),
    inputs: inputs.map(printQuantity),
    result: formatValue(result.value, result.unit),
  };
}

function printQuantity({ symbol, value, unit, words }: Quantity) {
  return { symbol: printSymbol(symbol), value: formatValue(value, unit), words };
}
