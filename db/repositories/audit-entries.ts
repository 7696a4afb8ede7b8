import type { Database, Transaction } from '../connection.ts';

export interface AuditEntry {
  chain: string;
  seq: number;
  at: Date;
  actor: string;
  action: string;
  subject: string;
  /** JSON as it was stored: the hash is over this very text. */
  before: string | null;
  after: string | null;
  ip: string | null;
  requestId: string | null;
  previousHash: Buffer;
  hash: Buffer;
}

/** Number and hash of a chain's last entry, kept outside the chain, so that a cut tail is missed. */
export interface ChainHead {
  seq: number;
  hash: Buffer | null;
}

export const systemChain = 'system';
const applicationPrefix = 'application:';
const systemHead = 'audit.system-head';

const columns = {
  chain: 'chain',
  seq: 'seq',
  at: 'at',
  actor: 'actor',
  action: 'action',
  subject: 'subject',
  before: 'before_json',
  after: 'after_json',
  ip: 'ip',
  requestId: 'request_id',
  previousHash: 'previous_hash',
  hash: 'hash',
} as const satisfies Record<keyof AuditEntry, string>;

function toSystemHead(value: string | undefined): ChainHead {
  const { seq, hash } = JSON.parse(value ?? '{"seq":0,"hash":null}') as { seq: number; hash: string | null };
  return { seq, hash: hash === null ? null : Buffer.from(hash, 'hex') };
}

/**
 * Waits for the chain's head and keeps it until the transaction ends. The head is a row of its own, not the chain's
 * last entry: who waited for the last entry would find, once it has it, that it is no longer the last.
 */
export async function lockChainHead(trx: Transaction, chain: string): Promise<ChainHead> {
  if (chain === systemChain) {
    await trx.raw(`INSERT IGNORE INTO settings (name, value) VALUES (?, '{"seq":0,"hash":null}')`, [
      systemHead,
    ]);
    const row = await trx('settings')
      .where({ name: systemHead })
      .forUpdate()
      .first<{ value: string }>('value');
    return toSystemHead(row.value);
  }
  const head = await trx('applications')
    .where({ public_id: chain.slice(applicationPrefix.length) })
    .forUpdate()
    .first<ChainHead | undefined>({ seq: 'audit_seq', hash: 'audit_head' });
  if (head === undefined)
    throw new Error(`Audit chain: got "${chain}", expected "system" or an application's`);
  return head;
}

export async function insertAuditEntry(trx: Transaction, entry: AuditEntry): Promise<void> {
  const row = Object.entries(columns).map(([key, column]) => [column, entry[key as keyof AuditEntry]]);
  await trx('audit_entries').insert(Object.fromEntries(row));
  if (entry.chain === systemChain) {
    const value = JSON.stringify({ seq: entry.seq, hash: entry.hash.toString('hex') });
    await trx('settings').where({ name: systemHead }).update({ value });
    return;
  }
  await trx('applications')
    .where({ public_id: entry.chain.slice(applicationPrefix.length) })
    .update({ audit_seq: entry.seq, audit_head: entry.hash });
}

/** Of one chain, after an entry, in order. */
export async function listAuditEntries(
  db: Database,
  chain: string,
  afterSeq = 0,
  limit = 1000,
): Promise<AuditEntry[]> {
  return db('audit_entries')
    .where({ chain })
    .andWhere('seq', '>', afterSeq)
    .orderBy('seq')
    .limit(limit)
    .select<AuditEntry[]>(columns);
}

/** The last entry about what the chain belongs to; others tell of its runs. */
export async function findLastOwnEntry(db: Database, chain: string): Promise<AuditEntry | undefined> {
  const [entry] = await db('audit_entries')
    .where({ chain, subject: chain })
    .orderBy('seq', 'desc')
    .limit(1)
    .select<AuditEntry[]>(columns);
  return entry;
}

/** Every chain that has a head, with it. */
export async function listChainHeads(db: Database): Promise<Map<string, ChainHead>> {
  const applications = await db('applications')
    .where('audit_seq', '>', 0)
    .orderBy('id')
    .select<(ChainHead & { publicId: string })[]>({
      publicId: 'public_id',
      seq: 'audit_seq',
      hash: 'audit_head',
    });
  const system = await db('settings')
    .where({ name: systemHead })
    .first<{ value: string } | undefined>('value');
  return new Map([
    ...(system === undefined ? [] : [[systemChain, toSystemHead(system.value)] as const]),
    ...applications.map(({ publicId, seq, hash }) => [applicationPrefix + publicId, { seq, hash }] as const),
  ]);
}

/** Every chain that has entries. */
export async function listChains(db: Database): Promise<string[]> {
  return db('audit_entries').distinct('chain').orderBy('chain').pluck('chain');
}
