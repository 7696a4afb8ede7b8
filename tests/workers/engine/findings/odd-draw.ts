/** What a seed decides, one thing after the other (mulberry32; public domain). */
export class Draw {
  private state: number;

  constructor(seed: number) {
    this.state = seed;
  }

  private next(): number {
    this.state = (this.state + 0x6d2b79f5) | 0;
    let t = Math.imul(this.state ^ (this.state >>> 15), 1 | this.state);
    t ^= t + Math.imul(t ^ (t >>> 7), 61 | t);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  }

  chance(share: number): boolean {
    return this.next() < share;
  }

  between(low: number, high: number): number {
    return low + (high - low) * this.next();
  }

  upTo(most: number): number {
    return Math.floor(this.next() * (most + 1));
  }

  pick<T>(list: readonly T[]): T {
    return list[this.upTo(list.length - 1)]!;
  }

  truth(): boolean {
    return this.chance(0.5);
  }

  /** Some of the fields; each that is left away is data that is missing. */
  some<T extends object>(fields: T, share = 0.6): Partial<T> {
    return Object.fromEntries(Object.entries(fields).filter(() => this.chance(share))) as Partial<T>;
  }

  many<T>(most: number, make: (index: number) => T): T[] {
    return Array.from({ length: this.upTo(most) }, (_, index) => make(index));
  }
}

/** Phases that an element may have where a node has these. */
export const partsOf: Record<string, readonly string[]> = {
  A: ['A'],
  B: ['B'],
  C: ['C'],
  AB: ['AB', 'A', 'B'],
  BC: ['BC', 'B', 'C'],
  CA: ['CA', 'C', 'A'],
  ABC: ['ABC', 'AB', 'BC', 'CA', 'A', 'B', 'C'],
};
