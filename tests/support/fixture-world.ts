import { createHash } from 'node:crypto';
import { inTransaction, type Database } from '../../db/connection.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { insertModelNodes } from '../../db/repositories/model-nodes.ts';
import { insertPublishedVersion } from '../../db/repositories/model-versions.ts';
import { insertNetworkModel } from '../../db/repositories/network-models.ts';
import { insertOrganisation } from '../../db/repositories/organisations.ts';
import { saveSetting } from '../../db/repositories/settings.ts';
import { insertUser } from '../../db/repositories/users.ts';
import type { Actor } from '../../server/context.ts';
import { hashPassword } from '../../server/services/passwords.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { Role } from '../../shared/schemas/sessions.ts';
import { insertFixtureEquipment } from './fixture-equipment.ts';
import { listFixtureNodes, makeFixtureModel } from './fixture-feeder.ts';
import { password } from './test-app.ts';

const people = {
  applicant: { name: 'Ada Brenn', email: 'ada@saltwick.example', role: 'applicant', of: 'Saltwick Solar' },
  colleague: { name: 'Bo Carr', email: 'bo@saltwick.example', role: 'applicant', of: 'Saltwick Solar' },
  rival: { name: 'Cy Dunmore', email: 'cy@tarnside.example', role: 'applicant', of: 'Tarnside Energy' },
  reviewer: { name: 'Mira Holt', email: 'mira@utility.example', role: 'reviewer', of: null },
  secondReviewer: { name: 'Ned Ivers', email: 'ned@utility.example', role: 'reviewer', of: null },
  planner: { name: 'Pia Jessop', email: 'pia@utility.example', role: 'planner', of: null },
  administrator: { name: 'Quin Ladd', email: 'quin@utility.example', role: 'administrator', of: null },
  auditor: { name: 'Ros Marl', email: 'ros@utility.example', role: 'auditor', of: null },
} as const satisfies Record<string, { name: string; email: string; role: Role; of: string | null }>;

export type FixturePerson = keyof typeof people;

export interface FixtureWorld {
  people: Record<FixturePerson, Actor>;
  model: { id: number; code: string; versionId: number };
  ruleSetVersionId: number;
  calendarId: number;
}

// Made once: argon2 is slow on purpose.
let passwordHash: Promise<string> | undefined;

async function insertPeople(db: Database): Promise<Record<FixturePerson, Actor>> {
  passwordHash ??= hashPassword(password);
  const hash = await passwordHash;
  const organisations: Record<string, number> = {};
  const actors: Partial<Record<FixturePerson, Actor>> = {};
  for (const [key, { name, email, role, of }] of Object.entries(people)) {
    if (of !== null)
      organisations[of] ??= await insertOrganisation(db, { publicId: newPublicId(), name: of });
    const organisationId = of === null ? null : (organisations[of] ?? null);
    const person = { publicId: newPublicId(), name, email, role, organisationId };
    const id = await insertUser(db, { ...person, passwordHash: hash });
    actors[key as FixturePerson] = { id, ...person };
  }
  return actors as Record<FixturePerson, Actor>;
}

async function insertModel(db: Database, at: Date): Promise<FixtureWorld['model']> {
  const bytes = Buffer.from(JSON.stringify(makeFixtureModel()));
  return inTransaction(db, async (trx) => {
    const code = 'FX';
    const place = { lng: -31, lat: 42 };
    const id = await insertNetworkModel(trx, {
      code,
      name: 'Fixture bus',
      substation: 'Fixture Head',
      ...place,
    });
    const versionId = await insertPublishedVersion(trx, {
      modelId: id,
      number: 1,
      modelSha256: await insertBlob(trx, bytes),
      absorbs: [],
      publishedBy: null,
      publishedAt: at,
    });
    await insertModelNodes(trx, versionId, listFixtureNodes());
    return { id, code, versionId };
  });
}

async function insertRules(
  db: Database,
  at: Date,
): Promise<{ ruleSetVersionId: number; calendarId: number }> {
  const content = JSON.stringify(proFormaRuleSet);
  const [ruleSetVersionId] = await db('rule_set_versions').insert({
    code: proFormaRuleSet.code,
    number: proFormaRuleSet.number,
    valid_from: '2020-01-01',
    content,
    sha256: createHash('sha256').update(content).digest(),
    confirmed_at: at,
  });
  const [calendarId] = await db('holiday_calendars').insert({
    code: 'utility',
    number: 1,
    days: JSON.stringify(['2026-12-25', '2027-01-01']),
    published_at: at,
  });
  return { ruleSetVersionId: ruleSetVersionId as number, calendarId: calendarId as number };
}

/**
 * One of everything that a request needs: two organisations (the applicant's and a rival's), a person of each role,
 * a published model of six nodes, equipment, a rule set whose remembered values are confirmed, a holiday calendar.
 * Everybody's password is that of test-app.ts.
 */
export async function makeFixtureWorld(
  db: Database,
  at = new Date('2026-01-05T12:00:00Z'),
): Promise<FixtureWorld> {
  await saveSetting(db, 'utility', {
    name: 'Fixture Light & Power',
    territory: 'Fixture Sound',
    timeZone: 'America/New_York',
    contactEmail: 'desk@utility.example',
    referencePrefix: 'FX',
  });
  await saveSetting(db, 'map.addresses', [
    { label: '4 Lateral Lane, Saltwick', lat: 42.0201, lng: -31.01 },
    { label: '9 Lateral Lane, Saltwick', lat: 42.0203, lng: -31.01 },
    { label: '12 Harbour Street, Oxmere', lat: 42.01, lng: -31.001 },
  ]);
  const empty = { type: 'FeatureCollection', features: [] };
  await saveSetting(db, 'map.layers', {
    outline: empty,
    water: empty,
    woods: empty,
    parcels: empty,
    roads: empty,
    places: empty,
  });
  await insertFixtureEquipment(db);
  return { people: await insertPeople(db), model: await insertModel(db, at), ...(await insertRules(db, at)) };
}
