import type { Knex } from 'knex';
import type { Database } from '../connection.ts';

interface ModelSummary {
  code: string;
  name: string;
  substation: string;
  versionNumber: number;
  publishedAt: Date;
  nodeCount: number;
  /** Of most of its nodes. */
  kv: number;
  circuits: string[];
  /** Projects that hold a place in its queue. */
  queueLength: number;
}

interface SummaryRow extends Omit<ModelSummary, 'circuits'> {
  circuits: string | null;
}

/** Published models with what a list says of each. */
export async function listModelSummaries(db: Database): Promise<ModelSummary[]> {
  const ofVersion = () => db('model_nodes as node').whereRaw('node.version_id = version.id');
  const usualKv = ofVersion().select('node.kv').groupBy('node.kv').orderByRaw('COUNT(*) DESC').limit(1);
  const circuits = ofVersion().select(
    db.raw("GROUP_CONCAT(DISTINCT node.circuit ORDER BY node.circuit SEPARATOR '\\n')"),
  );
  /** As raw SQL: the builder's own types of a subquery are too deep for the compiler to compare reliably. */
  const asColumn = (name: string, query: Knex.QueryBuilder) => db.raw('(?) as ??', [query, name]);
  const waiting = db('queue_entries as entry')
    .whereRaw('entry.model_id = model.id')
    .whereNull('entry.left_at')
    .count('*');
  const rows = await db('network_models as model')
    .join('model_versions as version', 'version.id', 'model.published_version_id')
    .orderBy('model.code')
    .select<SummaryRow[]>(
      'model.code',
      'model.name',
      'model.substation',
      'version.number as versionNumber',
      'version.published_at as publishedAt',
      asColumn('nodeCount', ofVersion().count('*')),
      asColumn('kv', usualKv),
      asColumn('circuits', circuits),
      asColumn('queueLength', waiting),
    );
  return rows.map((row) => ({ ...row, circuits: row.circuits === null ? [] : row.circuits.split('\n') }));
}
