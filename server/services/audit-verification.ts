import type { Database } from '../../db/connection.ts';
import {
  listAuditEntries,
  listChainHeads,
  listChains,
  type ChainHead,
} from '../../db/repositories/audit-entries.ts';
import { hashAuditEntry, noHash } from './audit.ts';

export interface ChainState {
  chain: string;
  entries: number;
  /** The first entry that does not fit, and why; null where all do. */
  fault: { seq: number; words: string } | null;
}

async function* readChain(db: Database, chain: string) {
  for (let after = 0; ;) {
    const page = await listAuditEntries(db, chain, after);
    yield* page;
    const last = page.at(-1);
    if (last === undefined) return;
    after = last.seq;
  }
}

function findHeadFault(last: ChainHead, head: ChainHead | undefined): ChainState['fault'] {
  if (head === undefined) return { seq: last.seq, words: 'nothing keeps the head of this chain any more' };
  if (head.seq > last.seq) {
    return {
      seq: last.seq + 1,
      words: `it is missing: the head says that the chain has ${head.seq} entries`,
    };
  }
  if (head.seq < last.seq) return { seq: head.seq + 1, words: 'it was added past the head' };
  if (head.hash === null || !head.hash.equals(last.hash ?? noHash)) {
    return { seq: last.seq, words: 'its hash is not the one that the head keeps' };
  }
  return null;
}

async function verifyChain(db: Database, chain: string, head: ChainHead | undefined): Promise<ChainState> {
  const last: ChainHead = { seq: 0, hash: null };
  for await (const entry of readChain(db, chain)) {
    const seq = last.seq + 1;
    const fail = (words: string): ChainState => ({ chain, entries: last.seq, fault: { seq, words } });
    if (entry.seq !== seq) return fail(`it is missing: the next one there is ${entry.seq}`);
    if (!entry.previousHash.equals(last.hash ?? noHash)) {
      return fail('it does not follow from the entry before it');
    }
    if (!hashAuditEntry(entry).equals(entry.hash)) return fail('what it says is not what was hashed');
    last.seq = seq;
    last.hash = entry.hash;
  }
  return { chain, entries: last.seq, fault: findHeadFault(last, head) };
}

/** Recomputes every chain from its first entry and compares where it ends with the head kept outside it. */
export async function* verifyAudit(db: Database): AsyncGenerator<ChainState> {
  const heads = await listChainHeads(db);
  const chains = new Set([...heads.keys(), ...(await listChains(db))]);
  for (const chain of chains) yield verifyChain(db, chain, heads.get(chain));
}
