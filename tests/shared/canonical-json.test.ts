import { describe, expect, it } from 'vitest';
import { canonicalJson } from '../../shared/canonical-json.ts';

describe('canonical JSON', () => {
  it('writes one text for one value, in whatever order its keys were set', () => {
    const text = '{"a":[1,{"x":null,"y":"é"}],"b":true,"ä":1.5}';
    expect(canonicalJson({ b: true, ä: 1.5, a: [1, { y: 'é', x: null }] })).toBe(text);
    expect(canonicalJson(JSON.parse(text))).toBe(text);
  });

  it('keeps the order of lists, which means something', () => {
    expect(canonicalJson([2, 1])).not.toBe(canonicalJson([1, 2]));
  });

  it.each([
    ['a date', { at: new Date(0) }, 'value.at'],
    ['bytes', { hash: Buffer.from('x') }, 'value.hash'],
    ['undefined', { list: [1, undefined] }, 'value.list.1'],
    ['a number that JSON does not know', Number.NaN, 'value'],
  ])('refuses %s and says where it is', (_what, value, path) => {
    expect(() => canonicalJson(value)).toThrow(`${path}: got`);
  });
});
