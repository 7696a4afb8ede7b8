import type { Knex } from 'knex';

/** Append-only: one hash chain an application and one for the system; triggers refuse update and delete. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS audit_entries (
    chain VARCHAR(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    seq INT UNSIGNED NOT NULL,
    at DATETIME(3) NOT NULL,
    actor VARCHAR(200) NOT NULL,
    action VARCHAR(60) NOT NULL,
    subject VARCHAR(120) NOT NULL,
    before_json LONGTEXT NULL,
    after_json LONGTEXT NULL,
    ip VARCHAR(45) NULL,
    request_id VARCHAR(64) NULL,
    previous_hash BINARY(32) NOT NULL,
    hash BINARY(32) NOT NULL,
    PRIMARY KEY (chain, seq)
  )`);
  await db.raw(`CREATE OR REPLACE TRIGGER audit_entries_no_update BEFORE UPDATE ON audit_entries
    FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'audit entries are never changed'`);
  await db.raw(`CREATE OR REPLACE TRIGGER audit_entries_no_delete BEFORE DELETE ON audit_entries
    FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'audit entries are never deleted'`);
}

export async function down(db: Knex): Promise<void> {
  await db.schema.dropTableIfExists('audit_entries');
}
