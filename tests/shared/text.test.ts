import { describe, expect, it } from 'vitest';
import { listProblems } from '../../server/validate.ts';
import { manyLines, oneLine } from '../../shared/schemas/text.ts';

const name = oneLine('Enter a name', 10);
const reason = manyLines('Give the reason', 20, 3);
const refused = (words: string) => [{ path: '', message: words }];

describe('typed text', () => {
  it.each(['Ridge farm', 'Ærø', '田中農場', 'Café 🌞'])('takes %s as a name', (text) => {
    expect(listProblems(name, text)).toEqual([]);
  });

  it.each([
    ['nothing', ''],
    ['blanks', '   '],
    ['two lines', 'a\nb'],
    ['a NUL', 'a\u0000b'],
    ['a mark that turns the writing', 'a\u202Eb'],
    ['half a surrogate pair', 'a\uD83D'],
    ['too much', 'a'.repeat(11)],
  ])('refuses %s as a name, in its own words', (_what, text) => {
    expect(listProblems(name, text)).toEqual(refused('Enter a name'));
  });

  it('takes several lines as a reason, but not blank ones', () => {
    expect(listProblems(reason, 'first\nsecond')).toEqual([]);
    expect(listProblems(reason, ' \n \n ')).toEqual(refused('Give the reason'));
  });
});
