import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { SignInTurns } from '../../server/middleware/sign-in-turns.ts';

const settings = { most: 3, turnMilliseconds: 1000, patienceMilliseconds: 3000, seats: 4 };
const stay = new AbortController().signal;

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

/** How each of them ended so far. */
function watch(takes: Promise<boolean>[]): (boolean | undefined)[] {
  const ended: (boolean | undefined)[] = takes.map(() => undefined);
  takes.forEach((take, index) => void take.then((isMine) => (ended[index] = isMine)));
  return ended;
}

const settle = (milliseconds: number) => vi.advanceTimersByTimeAsync(milliseconds);

describe('turns at a password', () => {
  it('are free up to the limit, and then come one at a time', async () => {
    const turns = new SignInTurns(settings);
    const ended = watch(Array.from({ length: 5 }, () => turns.take('pair', stay)));
    await settle(0);
    expect(ended).toEqual([true, true, true, undefined, undefined]);
    await settle(1000);
    expect(ended.filter(Boolean)).toHaveLength(4);
    await settle(1000);
    expect(ended.filter(Boolean)).toHaveLength(5);
  });

  it('bound what a guesser who asks without pause gets in an hour', async () => {
    const turns = new SignInTurns({ ...settings, most: 10, turnMilliseconds: 10_000, seats: 30 });
    let guesses = 0;
    const ask = async (): Promise<void> => {
      for (;;) if (await turns.take('pair', stay)) guesses += 1;
    };
    for (let thread = 0; thread < 20; thread += 1) void ask();
    await settle(3_600_000);
    expect(guesses).toBe(10 + 360);
  });

  it('are drawn by lot, so that one who asks once among many who ask without pause has a share', async () => {
    let wins = 0;
    for (let round = 0; round < 200; round += 1) {
      const turns = new SignInTurns({ ...settings, seats: 10 });
      for (let crowd = 0; crowd < 7; crowd += 1) void turns.take('pair', stay);
      const [mine] = [watch([turns.take('pair', stay)])];
      await settle(3500);
      if (mine[0]) wins += 1;
    }
    // One of five, three draws: 1 − 4/5 · 3/4 · 2/3 = 60 %; 200 rounds stray by 3.5 %, five times that is allowed.
    expect(wins / 200).toBeGreaterThan(0.42);
    expect(wins / 200).toBeLessThan(0.78);
  });

  it('that are given back come to who waits, and to the next at once when nobody does', async () => {
    const turns = new SignInTurns(settings);
    const ended = watch(Array.from({ length: 4 }, () => turns.take('pair', stay)));
    turns.giveBack('pair');
    await settle(0);
    expect(ended).toEqual([true, true, true, true]);
    turns.giveBack('pair');
    expect(await turns.take('pair', stay)).toBe(true);
  });

  it('are not waited for past patience, nor by who has gone, nor by more than there are seats', async () => {
    const turns = new SignInTurns({ ...settings, turnMilliseconds: 60_000 }, () => 0);
    for (let turn = 0; turn < 3; turn += 1) await turns.take('pair', stay);
    const gone = new AbortController();
    const ended = watch([
      turns.take('pair', gone.signal),
      ...Array.from({ length: 4 }, () => turns.take('pair', stay)),
    ]);
    await settle(0);
    // The fifth displaced one of the four, by lot (here the first).
    expect(ended).toEqual([false, undefined, undefined, undefined, undefined]);
    gone.abort();
    await settle(3000);
    expect(ended).toEqual([false, false, false, false, false]);
    const left = new AbortController();
    const late = watch([turns.take('pair', left.signal)]);
    left.abort();
    await settle(0);
    expect(late).toEqual([false]);
  });

  it('are counted for each key by itself, and forgotten when all are made good', async () => {
    const turns = new SignInTurns(settings);
    for (let turn = 0; turn < 3; turn += 1) await turns.take('one', stay);
    expect(await turns.take('other', stay)).toBe(true);
    await settle(3000);
    expect(vi.getTimerCount()).toBe(0);
  });
});
