/** A source of repeatable chance: every call moves on, the same seed always tells the same story. */
export interface Dice {
  /** At least 0, below 1. */
  unit(): number;
  between(low: number, high: number): number;
  whole(low: number, high: number): number;
  pick<T>(choices: readonly T[]): T;
  chance(probability: number): boolean;
}

/** mulberry32: 32 bits of state, enough for a map; never for anything secret. */
export function makeDice(seed: number): Dice {
  let state = seed >>> 0;
  const unit = () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
  };
  const between = (low: number, high: number) => low + (high - low) * unit();
  const whole = (low: number, high: number) => Math.floor(between(low, high + 1));
  return {
    unit,
    between,
    whole,
    chance: (probability) => unit() < probability,
    pick: (choices) => {
      const chosen = choices[whole(0, choices.length - 1)];
      if (chosen === undefined) throw new RangeError('pick: got no choices, expected at least one');
      return chosen;
    },
  };
}
