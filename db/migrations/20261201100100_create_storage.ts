import type { Knex } from 'knex';

/** Compressed blobs by the SHA-256 of their uncompressed bytes, and the rows of uploaded files. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS blobs (
    sha256 BINARY(32) NOT NULL PRIMARY KEY,
    gzip LONGBLOB NOT NULL,
    raw_length BIGINT UNSIGNED NOT NULL
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS files (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    organisation_id BIGINT UNSIGNED NOT NULL,
    sha256 BINARY(32) NOT NULL,
    path VARCHAR(120) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    size_bytes BIGINT UNSIGNED NOT NULL,
    media_type VARCHAR(60) NOT NULL,
    original_name VARCHAR(255) NOT NULL,
    uploaded_by BIGINT UNSIGNED NOT NULL,
    uploaded_at DATETIME(3) NOT NULL,
    CONSTRAINT files_organisation FOREIGN KEY (organisation_id) REFERENCES organisations (id),
    CONSTRAINT files_uploader FOREIGN KEY (uploaded_by) REFERENCES users (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['files', 'blobs']) await db.schema.dropTableIfExists(table);
}
