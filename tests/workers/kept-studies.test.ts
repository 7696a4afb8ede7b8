import { createHash } from 'node:crypto';
import { expect, it } from 'vitest';
import { studyFormat } from '../../shared/schemas/study.ts';
import { getNamedStudy } from '../../workers/kept-studies.ts';
import { makeFixtureModel } from '../support/fixture-feeder.ts';
import { machineProject } from '../support/fixture-runs.ts';

function makeNamed(kva: number) {
  const study = { format: studyFormat, ...makeFixtureModel(), project: machineProject(kva) };
  const studyBytes = Buffer.from(JSON.stringify(study));
  return { studySha256: createHash('sha256').update(studyBytes).digest('hex'), studyBytes };
}

it('asks for the bytes of a study once, and keeps the four that were used last', () => {
  const studies = [1000, 1100, 1200, 1300, 1400].map(makeNamed);
  const first = studies[0]!;
  const kindOf = ({ studySha256 }: { studySha256: string }) => getNamedStudy({ studySha256 }).kind;
  expect(kindOf(first)).toBe('not-kept');
  for (const each of studies.slice(0, 4)) expect(getNamedStudy(each).kind).toBe('study');
  // Used again, so that the second is the one used longest ago when a fifth comes.
  expect(kindOf(first)).toBe('study');
  getNamedStudy(studies[4]!);
  expect(studies.map(kindOf)).toEqual(['study', 'not-kept', 'study', 'study', 'study']);
});

it('says what is wrong with bytes that are no study, or have no project, and keeps neither', () => {
  const bad = { studySha256: 'bad', studyBytes: Buffer.from('{') };
  expect(getNamedStudy(bad)).toMatchObject({ kind: 'refused' });
  const { project: _, ...feeder } = { format: studyFormat, ...makeFixtureModel(), project: null };
  const bare = { studySha256: 'bare', studyBytes: Buffer.from(JSON.stringify(feeder)) };
  expect(getNamedStudy(bare)).toEqual({
    kind: 'refused',
    problems: ['/project: got nothing, expected a project'],
  });
  for (const studySha256 of ['bad', 'bare']) expect(getNamedStudy({ studySha256 }).kind).toBe('not-kept');
});
