import { createHash } from 'node:crypto';
import type { Database, Transaction } from '../../db/connection.ts';
import type { systemChain } from '../../db/repositories/audit-entries.ts';
import {
  findLastOwnEntry,
  insertAuditEntry,
  listAuditEntries,
  lockChainHead,
  type AuditEntry,
} from '../../db/repositories/audit-entries.ts';
import { canonicalJson } from '../../shared/canonical-json.ts';
import type { AuditEntryView } from '../../shared/schemas/audit.ts';
import { roles, type Role } from '../../shared/schemas/sessions.ts';
import type { Actor, Context, Deps } from '../context.ts';

/** A chain is written `system` or `application:` and the public id. */
type AuditChain = typeof systemChain | `application:${string}`;

/** What stands before a chain's first entry. */
export const noHash = Buffer.alloc(32);

/** Over every field as it is stored, and over the hash before: no field can change, no entry can go unnoticed. */
export function hashAuditEntry(entry: Omit<AuditEntry, 'hash'>): Buffer {
  const { chain, seq, at, actor, action, subject, before, after, ip, requestId, previousHash } = entry;
  const text = canonicalJson({
    chain,
    seq,
    at: at.toISOString(),
    actor,
    action,
    subject,
    before,
    after,
    ip,
    requestId,
    previousHash: previousHash.toString('hex'),
  });
  return createHash('sha256').update(text, 'utf8').digest();
}

/** "Mira Holt, reviewer, 4dS…": the name for the reader, the id for two people of one name. */
function describeActor(actor: Actor | null): string {
  return actor === null ? 'the desk' : `${actor.name}, ${actor.role}, ${actor.publicId}`;
}

/** Name and role out of an entry's actor; undefined for what the desk did by itself. */
function readActor(text: string): { name: string; role: Role } | undefined {
  const [publicId, role, ...name] = text.split(', ').reverse();
  const known = roles.find((candidate) => candidate === role);
  if (publicId === undefined || known === undefined) return undefined;
  return { name: name.reverse().join(', '), role: known };
}

/**
 * Who made an application's present version, and when, as `reader` may know it: applicants read "the utility" for its
 * people. A version that the trail does not know is the applicant's own writing at a form that was sent back.
 */
export async function findLastChange(
  db: Database,
  application: { publicId: string; version: number; updatedAt: Date },
  reader: Actor,
): Promise<{ who: string; at: Date }> {
  const entry = await findLastOwnEntry(db, `application:${application.publicId}`);
  const after = JSON.parse(entry?.after ?? 'null') as { version?: number } | null;
  if (entry === undefined || after?.version !== application.version) {
    return { who: 'The applicant', at: application.updatedAt };
  }
  const actor = readActor(entry.actor);
  const isHidden = reader.role === 'applicant' && actor?.role !== 'applicant';
  return { who: isHidden ? 'The utility' : (actor?.name ?? 'The desk'), at: entry.at };
}

/**
 * Appends to a chain, in the transaction of what it tells. The chain's head is locked until that commits; for an
 * application it is the row that the caller has locked anyway.
 */
export async function recordAudit(
  trx: Transaction,
  context: Context,
  chain: AuditChain,
  action: string,
  subject: string,
  before: unknown,
  after: unknown,
): Promise<void> {
  const head = await lockChainHead(trx, chain);
  const entry: Omit<AuditEntry, 'hash'> = {
    chain,
    seq: head.seq + 1,
    at: context.now,
    actor: describeActor(context.actor),
    action,
    subject,
    before: before === null ? null : canonicalJson(before),
    after: after === null ? null : canonicalJson(after),
    ip: context.ip,
    requestId: context.requestId,
    previousHash: head.hash ?? noHash,
  };
  await insertAuditEntry(trx, { ...entry, hash: hashAuditEntry(entry) });
}

/** The whole chain of one application, oldest first. */
export async function listApplicationAudit(deps: Deps, publicId: string): Promise<AuditEntryView[]> {
  const entries = await listAuditEntries(deps.db, `application:${publicId}`);
  return entries.map((entry) => ({
    chain: entry.chain,
    seq: entry.seq,
    at: entry.at.toISOString(),
    actor: entry.actor,
    action: entry.action,
    subject: entry.subject,
    before: JSON.parse(entry.before ?? 'null') as unknown,
    after: JSON.parse(entry.after ?? 'null') as unknown,
    hash: entry.hash.toString('hex'),
  }));
}
