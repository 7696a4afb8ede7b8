import type { Knex } from 'knex';

/**
 * Screening runs: the row is the truth. `basis` freezes immutable ids, `token` and `lease_until` say whose turn it
 * is, and a result is stored only by the worker that still holds the token.
 */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS runs (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    application_id BIGINT UNSIGNED NOT NULL,
    kind VARCHAR(20) NOT NULL,
    basis LONGTEXT NOT NULL,
    basis_sha256 BINARY(32) NOT NULL,
    study_sha256 BINARY(32) NULL,
    result_sha256 BINARY(32) NULL,
    results_version INT UNSIGNED NOT NULL,
    state VARCHAR(20) NOT NULL,
    attempt INT UNSIGNED NOT NULL DEFAULT 0,
    token BINARY(16) NULL,
    lease_until DATETIME(3) NULL,
    next_attempt_at DATETIME(3) NULL,
    steps LONGTEXT NOT NULL DEFAULT '[]',
    summary LONGTEXT NULL,
    warnings LONGTEXT NULL,
    error TEXT NULL,
    error_detail TEXT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 1,
    queued_at DATETIME(3) NOT NULL,
    started_at DATETIME(3) NULL,
    finished_at DATETIME(3) NULL,
    INDEX runs_application (application_id, id),
    INDEX runs_state (state, queued_at),
    INDEX runs_basis (basis_sha256),
    CONSTRAINT runs_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT runs_study FOREIGN KEY (study_sha256) REFERENCES blobs (sha256),
    CONSTRAINT runs_result FOREIGN KEY (result_sha256) REFERENCES blobs (sha256),
    CONSTRAINT runs_kind CHECK (kind IN ('preliminary','official')),
    CONSTRAINT runs_state_known CHECK (state IN ('queued','running','finished','failed'))
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS run_findings (
    run_id BIGINT UNSIGNED NOT NULL,
    seq INT UNSIGNED NOT NULL,
    question VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    element VARCHAR(200) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL DEFAULT '',
    verdict VARCHAR(20) NOT NULL,
    value DOUBLE NULL,
    before_value DOUBLE NULL,
    comparison VARCHAR(4) NOT NULL,
    limit_value DOUBLE NULL,
    unit VARCHAR(20) NOT NULL,
    consequence VARCHAR(20) NOT NULL,
    source VARCHAR(400) NOT NULL,
    detail LONGTEXT NOT NULL,
    PRIMARY KEY (run_id, seq),
    CONSTRAINT run_findings_of FOREIGN KEY (run_id) REFERENCES runs (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS finding_waivers (
    run_id BIGINT UNSIGNED NOT NULL,
    question VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    element VARCHAR(200) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL DEFAULT '',
    reason TEXT NOT NULL,
    waived_by BIGINT UNSIGNED NOT NULL,
    waived_at DATETIME(3) NOT NULL,
    PRIMARY KEY (run_id, question, element),
    CONSTRAINT finding_waivers_of FOREIGN KEY (run_id) REFERENCES runs (id),
    CONSTRAINT finding_waivers_by FOREIGN KEY (waived_by) REFERENCES users (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS decisions (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    application_id BIGINT UNSIGNED NOT NULL,
    run_id BIGINT UNSIGNED NOT NULL,
    kind VARCHAR(20) NOT NULL,
    reason TEXT NOT NULL,
    conditions TEXT NULL,
    decided_by BIGINT UNSIGNED NOT NULL,
    decided_at DATETIME(3) NOT NULL,
    INDEX decisions_application (application_id),
    CONSTRAINT decisions_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT decisions_run FOREIGN KEY (run_id) REFERENCES runs (id),
    CONSTRAINT decisions_by FOREIGN KEY (decided_by) REFERENCES users (id),
    CONSTRAINT decisions_kind CHECK (kind IN ('approve','require-study','deny'))
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['decisions', 'finding_waivers', 'run_findings', 'runs'])
    await db.schema.dropTableIfExists(table);
}
