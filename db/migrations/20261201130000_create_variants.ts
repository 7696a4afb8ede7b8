import type { Knex } from 'knex';

/** Trials that somebody kept: what was changed in a run's study, and what the findings would then be. Never a run. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS variants (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    application_id BIGINT UNSIGNED NOT NULL,
    run_id BIGINT UNSIGNED NOT NULL,
    name VARCHAR(120) NOT NULL,
    changes LONGTEXT NOT NULL,
    findings LONGTEXT NOT NULL,
    kept_by BIGINT UNSIGNED NOT NULL,
    kept_at DATETIME(3) NOT NULL,
    UNIQUE INDEX variants_name (application_id, name),
    CONSTRAINT variants_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT variants_run FOREIGN KEY (run_id) REFERENCES runs (id),
    CONSTRAINT variants_by FOREIGN KEY (kept_by) REFERENCES users (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  await db.schema.dropTableIfExists('variants');
}
