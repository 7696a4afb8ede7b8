import { describe, expect, it } from 'vitest';
import { listRecordRows, writeAction, writeActor } from '../../../../src/components/desk/record-words.ts';

describe('the record of an application', () => {
  it('tells what was written as named values instead of JSON, however deep they lie', () => {
    const about = { run: 'r1', setAside: [{ question: 'contribution', reason: 'Small' }], items: [] };
    const rows = listRecordRows({
      stage: 'study-required',
      waitingOn: 'utility',
      version: 4,
      note: null,
      about,
    });
    expect(rows.map(({ term, value }) => `${term}: ${value}`)).toEqual([
      'Stage: Study required',
      'Who acts next: Waiting for the utility',
      'Version: 4',
      'Note: Nothing',
      'About, run: r1',
      'About, set aside 1, question: contribution',
      'About, set aside 1, reason: Small',
      'About, items: None',
    ]);
    expect(new Set(rows.map(({ key }) => key)).size).toBe(rows.length);
    expect(listRecordRows(null)).toEqual([]);
  });

  it('names events in words instead of their codes, and unknown ones by their code in plain letters', () => {
    expect(writeAction('require-study')).toBe('Study required');
    expect(writeAction('retry-run')).toBe('Stopped screening tried again');
    expect(writeAction('weigh-again')).toBe('Weigh again');
  });

  it('names a person without the id that only machines read', () => {
    expect(writeActor('Mira Holt, reviewer, 4dSxyz')).toBe('Mira Holt, reviewer');
    expect(writeActor('the desk')).toBe('the desk');
  });
});
