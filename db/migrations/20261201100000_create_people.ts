import type { Knex } from 'knex';

/** Organisations, people, sessions (connect-session-knex's shape) and the installation's settings. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS organisations (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    name VARCHAR(160) NOT NULL UNIQUE
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS users (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    organisation_id BIGINT UNSIGNED NULL,
    email VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    name VARCHAR(160) NOT NULL,
    password_hash VARCHAR(255) NOT NULL,
    role VARCHAR(20) NOT NULL,
    disabled_at DATETIME(3) NULL,
    version INT UNSIGNED NOT NULL DEFAULT 1,
    CONSTRAINT users_organisation FOREIGN KEY (organisation_id) REFERENCES organisations (id),
    CONSTRAINT users_role CHECK (role IN ('applicant','reviewer','planner','administrator','auditor')),
    CONSTRAINT users_applicant_belongs CHECK (role <> 'applicant' OR organisation_id IS NOT NULL)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS sessions (
    sid VARCHAR(255) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL PRIMARY KEY,
    sess LONGTEXT NOT NULL,
    expired DATETIME(3) NOT NULL,
    INDEX sessions_expired (expired)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS settings (
    name VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL PRIMARY KEY,
    value LONGTEXT NOT NULL,
    version INT UNSIGNED NOT NULL DEFAULT 1
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['settings', 'sessions', 'users', 'organisations'])
    await db.schema.dropTableIfExists(table);
}
