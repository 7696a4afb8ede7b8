import type { Knex } from 'knex';

/** What was reported of a place before an application, as it was then: figures and the versions they rest on. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS pre_application_reports (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    organisation_id BIGINT UNSIGNED NOT NULL,
    requested_by BIGINT UNSIGNED NOT NULL,
    requested_at DATETIME(3) NOT NULL,
    request LONGTEXT NOT NULL,
    model_version_id BIGINT UNSIGNED NOT NULL,
    node_id VARCHAR(120) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    circuit VARCHAR(60) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    rule_set_version_id BIGINT UNSIGNED NOT NULL,
    ahead_revision_ids LONGTEXT NOT NULL,
    figures LONGTEXT NOT NULL,
    INDEX pre_application_reports_of (organisation_id, id),
    CONSTRAINT pre_application_reports_organisation FOREIGN KEY (organisation_id) REFERENCES organisations (id),
    CONSTRAINT pre_application_reports_person FOREIGN KEY (requested_by) REFERENCES users (id),
    CONSTRAINT pre_application_reports_model FOREIGN KEY (model_version_id) REFERENCES model_versions (id),
    CONSTRAINT pre_application_reports_rules FOREIGN KEY (rule_set_version_id) REFERENCES rule_set_versions (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  await db.schema.dropTableIfExists('pre_application_reports');
}
