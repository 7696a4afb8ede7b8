import type { Finding } from '../../shared/schemas/findings.ts';
import type { TrialChange } from '../../shared/schemas/trials.ts';
import type { Database, Transaction } from '../connection.ts';

/** A trial that was kept. */
export interface Variant {
  publicId: string;
  runId: number;
  runPublicId: string;
  name: string;
  changes: TrialChange[];
  findings: Finding[];
  keptBy: string;
  keptAt: Date;
}

interface NewVariant {
  publicId: string;
  applicationId: number;
  runId: number;
  name: string;
  changes: TrialChange[];
  findings: Finding[];
  keptBy: number;
  keptAt: Date;
}

interface VariantRow extends Omit<Variant, 'changes' | 'findings'> {
  changes: string;
  findings: string;
}

export async function insertVariant(trx: Transaction, variant: NewVariant): Promise<void> {
  await trx('variants').insert({
    public_id: variant.publicId,
    application_id: variant.applicationId,
    run_id: variant.runId,
    name: variant.name,
    changes: JSON.stringify(variant.changes),
    findings: JSON.stringify(variant.findings),
    kept_by: variant.keptBy,
    kept_at: variant.keptAt,
  });
}

/** The newest first. */
export async function listVariants(db: Database, applicationId: number): Promise<Variant[]> {
  const rows = await db('variants')
    .join('users', 'users.id', 'variants.kept_by')
    .join('runs', 'runs.id', 'variants.run_id')
    .where({ 'variants.application_id': applicationId })
    .orderBy('variants.id', 'desc')
    .select<VariantRow[]>({
      publicId: 'variants.public_id',
      runId: 'variants.run_id',
      runPublicId: 'runs.public_id',
      name: 'variants.name',
      changes: 'variants.changes',
      findings: 'variants.findings',
      keptBy: 'users.name',
      keptAt: 'variants.kept_at',
    });
  return rows.map((row) => ({
    ...row,
    changes: JSON.parse(row.changes) as TrialChange[],
    findings: JSON.parse(row.findings) as Finding[],
  }));
}

export async function deleteVariant(
  trx: Transaction,
  applicationId: number,
  publicId: string,
): Promise<void> {
  await trx('variants').where({ application_id: applicationId, public_id: publicId }).delete();
}
