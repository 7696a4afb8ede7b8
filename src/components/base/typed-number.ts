/**
 * Reads a number as people type it: spaces around and between, thousands separators, the unit at its end, and a
 * typographic minus are dropped. Empty is undefined; what cannot be read (also "1,5", whose comma could be either)
 * stays the text that was typed, so that the answer of the server's own rule names it.
 */
export function readTypedNumber(typed: string, unit?: string): number | string | undefined {
  const trimmed = typed.trim();
  if (trimmed === '') return undefined;
  const withoutUnit =
    unit && trimmed.toLowerCase().endsWith(unit.toLowerCase()) ? trimmed.slice(0, -unit.length) : trimmed;
  const plain = withoutUnit.replace(/\u2212/g, '-').replace(/[\s\u00a0\u202f'’]/g, '');
  const grouped = /^[+-]?\d{1,3}(,\d{3})+(\.\d*)?$/.test(plain);
  const digits = grouped ? plain.replaceAll(',', '') : plain;
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(digits) ? Number(digits) : trimmed;
}
