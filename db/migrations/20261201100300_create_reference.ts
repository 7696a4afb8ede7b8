import type { Knex } from 'knex';

/** Versioned reference data: rule sets, equipment records, holiday calendars. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS rule_set_versions (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    code VARCHAR(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    number INT UNSIGNED NOT NULL,
    valid_from DATE NOT NULL,
    content LONGTEXT NOT NULL,
    sha256 BINARY(32) NOT NULL,
    confirmed_by BIGINT UNSIGNED NULL,
    confirmed_at DATETIME(3) NULL,
    first_used_at DATETIME(3) NULL,
    UNIQUE KEY rule_set_versions_number (code, number)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS equipment_versions (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    equipment_id BIGINT UNSIGNED NOT NULL,
    number INT UNSIGNED NOT NULL,
    maker VARCHAR(120) NOT NULL,
    model VARCHAR(120) NOT NULL,
    kind VARCHAR(30) NOT NULL,
    phases VARCHAR(10) NOT NULL,
    ratings LONGTEXT NOT NULL,
    sha256 BINARY(32) NOT NULL,
    state VARCHAR(20) NOT NULL DEFAULT 'released',
    certified_until DATE NULL,
    UNIQUE KEY equipment_versions_number (equipment_id, number),
    CONSTRAINT equipment_versions_state CHECK (state IN ('draft','released','withdrawn'))
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS holiday_calendars (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    code VARCHAR(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    number INT UNSIGNED NOT NULL,
    days LONGTEXT NOT NULL,
    published_at DATETIME(3) NOT NULL,
    UNIQUE KEY holiday_calendars_number (code, number)
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['holiday_calendars', 'equipment_versions', 'rule_set_versions'])
    await db.schema.dropTableIfExists(table);
}
