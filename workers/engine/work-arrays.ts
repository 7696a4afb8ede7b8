import type { ComplexArray } from './complex.ts';

/*
 * Where large arrays come from. Their memory lies outside the heap, and an engine that asks for a hundred megabytes of it and
 * drops them keeps the garbage collector going over everything else: more than half of the time of a study went there. What
 * is needed for a while only is therefore taken from here and given back, for the next to use.
 */

/** Hands out arrays full of zeros. */
export type Arrays = {
  floats(length: number): Float64Array;
  integers(length: number): Int32Array;
  bytes(length: number): Uint8Array;
  complex(length: number): ComplexArray;
  /** Zeros that nobody writes to: the same for all who ask. */
  zeros(length: number): Float64Array;
};

/** New arrays each time, which live as long as anyone knows them. */
export const newArrays: Arrays = {
  floats: (length) => new Float64Array(length),
  integers: (length) => new Int32Array(length),
  bytes: (length) => new Uint8Array(length),
  complex: (length) => ({ re: new Float64Array(length), im: new Float64Array(length) }),
  zeros: (length) => new Float64Array(length),
};

type NumberArray = Float64Array | Int32Array | Uint8Array;

/** Arrays that were given back, by length. */
class Spare<A extends NumberArray> {
  private readonly byLength = new Map<number, A[]>();

  take(length: number): A | undefined {
    const array = this.byLength.get(length)?.pop();
    array?.fill(0);
    return array;
  }

  keep(array: A): void {
    const alike = this.byLength.get(array.length);
    if (alike) alike.push(array);
    else this.byLength.set(array.length, [array]);
  }

  clear(): void {
    this.byLength.clear();
  }
}

const spareFloats = new Spare<Float64Array>();
const spareIntegers = new Spare<Int32Array>();
const spareBytes = new Spare<Uint8Array>();
let keptBytes = 0;

/** A study of 100,000 nodes takes about half of it, where it lists no scenarios. */
const mostKeptBytes = 96 * 1024 * 1024;

/** A shorter array costs less than to keep account of it. */
const leastLength = 1024;

/** Arrays that are all needed equally long. */
class BorrowedArrays implements Arrays {
  private readonly floatsOut: Float64Array[] = [];
  private readonly integersOut: Int32Array[] = [];
  private readonly bytesOut: Uint8Array[] = [];
  private readonly zerosOf = new Map<number, Float64Array>();

  floats(length: number): Float64Array {
    if (length < leastLength) return new Float64Array(length);
    const array = takeFrom(spareFloats, length) ?? new Float64Array(length);
    this.floatsOut.push(array);
    return array;
  }

  integers(length: number): Int32Array {
    if (length < leastLength) return new Int32Array(length);
    const array = takeFrom(spareIntegers, length) ?? new Int32Array(length);
    this.integersOut.push(array);
    return array;
  }

  bytes(length: number): Uint8Array {
    if (length < leastLength) return new Uint8Array(length);
    const array = takeFrom(spareBytes, length) ?? new Uint8Array(length);
    this.bytesOut.push(array);
    return array;
  }

  complex(length: number): ComplexArray {
    return { re: this.floats(length), im: this.floats(length) };
  }

  zeros(length: number): Float64Array {
    let array = this.zerosOf.get(length);
    if (!array) this.zerosOf.set(length, (array = this.floats(length)));
    return array;
  }

  giveBack(): void {
    for (const array of this.floatsOut) keepIn(spareFloats, array);
    for (const array of this.integersOut) keepIn(spareIntegers, array);
    for (const array of this.bytesOut) keepIn(spareBytes, array);
  }
}

function takeFrom<A extends NumberArray>(spare: Spare<A>, length: number): A | undefined {
  const array = spare.take(length);
  keptBytes -= array?.byteLength ?? 0;
  return array;
}

/** Where that is too much, all that was kept is dropped: it is mostly of lengths that no one asks for any more. */
function keepIn<A extends NumberArray>(spare: Spare<A>, array: A): void {
  if (keptBytes + array.byteLength > mostKeptBytes) {
    for (const each of [spareFloats, spareIntegers, spareBytes]) each.clear();
    keptBytes = 0;
  }
  keptBytes += array.byteLength;
  spare.keep(array);
}

/** Lends arrays for as long as `use` runs: nothing that it gives may hold any of them. */
export function withWorkArrays<R>(use: (arrays: Arrays) => R): R {
  const arrays = new BorrowedArrays();
  try {
    return use(arrays);
  } finally {
    arrays.giveBack();
  }
}
