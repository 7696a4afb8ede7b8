type Json = null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json };

/**
 * One text for one value: keys in order of their code units, no blanks. What is hashed is written with it, so that the
 * order in which somebody put an object together never matters. Dates and undefined are not JSON and are refused.
 */
export function canonicalJson(value: unknown): string {
  return write(value, 'value');
}

function write(value: unknown, path: string): string {
  if (Array.isArray(value))
    return `[${value.map((item, index) => write(item, `${path}.${index}`)).join(',')}]`;
  if (typeof value === 'object' && value !== null && Object.getPrototypeOf(value) === Object.prototype) {
    const entries = Object.entries(value as Record<string, Json>).sort(([a], [b]) => (a < b ? -1 : 1));
    return `{${entries.map(([key, item]) => `${JSON.stringify(key)}:${write(item, `${path}.${key}`)}`).join(',')}}`;
  }
  const isPlain = value === null || typeof value === 'string' || typeof value === 'boolean';
  if (isPlain || Number.isFinite(value)) return JSON.stringify(value);
  throw new TypeError(`${path}: got ${String(value)}, expected what JSON can say`);
}
