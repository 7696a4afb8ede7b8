import type { Knex } from 'knex';

/** A network model is one substation bus and what hangs on it; versions are immutable once published. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS network_models (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    code VARCHAR(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    name VARCHAR(160) NOT NULL,
    substation VARCHAR(160) NOT NULL,
    place POINT NOT NULL,
    published_version_id BIGINT UNSIGNED NULL,
    next_position INT UNSIGNED NOT NULL DEFAULT 1,
    version INT UNSIGNED NOT NULL DEFAULT 1
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS model_versions (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    model_id BIGINT UNSIGNED NOT NULL,
    number INT UNSIGNED NOT NULL,
    state VARCHAR(20) NOT NULL,
    parent_id BIGINT UNSIGNED NULL,
    model_sha256 BINARY(32) NOT NULL,
    absorbs LONGTEXT NOT NULL DEFAULT '[]',
    published_by BIGINT UNSIGNED NULL,
    published_at DATETIME(3) NULL,
    UNIQUE KEY model_versions_number (model_id, number),
    CONSTRAINT model_versions_model FOREIGN KEY (model_id) REFERENCES network_models (id),
    CONSTRAINT model_versions_blob FOREIGN KEY (model_sha256) REFERENCES blobs (sha256),
    CONSTRAINT model_versions_state CHECK (state IN ('draft','published','retired'))
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS model_nodes (
    version_id BIGINT UNSIGNED NOT NULL,
    node_id VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    circuit VARCHAR(80) NULL,
    kv DOUBLE NOT NULL,
    phases VARCHAR(3) NOT NULL,
    distance_km DOUBLE NULL,
    place POINT NOT NULL,
    PRIMARY KEY (version_id, node_id),
    CONSTRAINT model_nodes_version FOREIGN KEY (version_id) REFERENCES model_versions (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['model_nodes', 'model_versions', 'network_models'])
    await db.schema.dropTableIfExists(table);
}
