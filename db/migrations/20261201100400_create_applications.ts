import type { Knex } from 'knex';

/** Applications with their draft, frozen revisions and files. `version` guards every change of the row. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS applications (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    number INT UNSIGNED NULL UNIQUE,
    organisation_id BIGINT UNSIGNED NOT NULL,
    created_by BIGINT UNSIGNED NOT NULL,
    name VARCHAR(160) NOT NULL DEFAULT '',
    place VARCHAR(200) NULL,
    kind VARCHAR(30) NULL,
    size_kw DOUBLE NULL,
    export_kw DOUBLE NULL,
    model_id BIGINT UNSIGNED NULL,
    circuit VARCHAR(80) NULL,
    stage VARCHAR(30) NOT NULL,
    waiting_on VARCHAR(10) NOT NULL,
    reviewer_id BIGINT UNSIGNED NULL,
    revision_id BIGINT UNSIGNED NULL,
    run_id BIGINT UNSIGNED NULL,
    rule_set_version_id BIGINT UNSIGNED NULL,
    received_on DATE NULL,
    next_due_on DATE NULL,
    outside_count INT UNSIGNED NULL,
    needs_data_count INT UNSIGNED NULL,
    audit_seq INT UNSIGNED NOT NULL DEFAULT 0,
    audit_head BINARY(32) NULL,
    version INT UNSIGNED NOT NULL DEFAULT 1,
    created_at DATETIME(3) NOT NULL,
    updated_at DATETIME(3) NOT NULL,
    INDEX applications_stage (stage, next_due_on),
    INDEX applications_reviewer (reviewer_id),
    INDEX applications_organisation (organisation_id),
    CONSTRAINT applications_belongs FOREIGN KEY (organisation_id) REFERENCES organisations (id),
    CONSTRAINT applications_creator FOREIGN KEY (created_by) REFERENCES users (id),
    CONSTRAINT applications_reviewed_by FOREIGN KEY (reviewer_id) REFERENCES users (id),
    CONSTRAINT applications_model FOREIGN KEY (model_id) REFERENCES network_models (id),
    CONSTRAINT applications_waiting CHECK (waiting_on IN ('applicant','utility','nobody'))
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS application_drafts (
    application_id BIGINT UNSIGNED NOT NULL PRIMARY KEY,
    answers LONGTEXT NOT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 1,
    updated_by BIGINT UNSIGNED NOT NULL,
    updated_at DATETIME(3) NOT NULL,
    CONSTRAINT application_drafts_of FOREIGN KEY (application_id) REFERENCES applications (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS application_revisions (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    application_id BIGINT UNSIGNED NOT NULL,
    number INT UNSIGNED NOT NULL,
    answers LONGTEXT NOT NULL,
    project_sha256 BINARY(32) NOT NULL,
    equipment_version_ids LONGTEXT NOT NULL DEFAULT '[]',
    model_id BIGINT UNSIGNED NOT NULL,
    poi_node VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    circuit VARCHAR(80) NULL,
    attested_by VARCHAR(120) NOT NULL,
    attested_user_id BIGINT UNSIGNED NOT NULL,
    attested_at DATETIME(3) NOT NULL,
    UNIQUE KEY application_revisions_number (application_id, number),
    CONSTRAINT application_revisions_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT application_revisions_project FOREIGN KEY (project_sha256) REFERENCES blobs (sha256),
    CONSTRAINT application_revisions_model FOREIGN KEY (model_id) REFERENCES network_models (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS revision_files (
    revision_id BIGINT UNSIGNED NOT NULL,
    file_id BIGINT UNSIGNED NOT NULL,
    purpose VARCHAR(30) NOT NULL,
    PRIMARY KEY (revision_id, file_id),
    CONSTRAINT revision_files_revision FOREIGN KEY (revision_id) REFERENCES application_revisions (id),
    CONSTRAINT revision_files_file FOREIGN KEY (file_id) REFERENCES files (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['revision_files', 'application_revisions', 'application_drafts', 'applications'])
    await db.schema.dropTableIfExists(table);
}
