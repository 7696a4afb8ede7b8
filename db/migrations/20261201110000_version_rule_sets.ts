import type { Knex } from 'knex';

/**
 * Rule sets are drafted, then published from a date; who confirmed which remembered clause stands beside them. Triggers
 * keep what is published as it is, and what was used where it is.
 */
export async function up(db: Knex): Promise<void> {
  await db.raw(`ALTER TABLE rule_set_versions
    MODIFY COLUMN valid_from DATE NULL,
    ADD COLUMN IF NOT EXISTS state VARCHAR(20) NOT NULL DEFAULT 'published',
    ADD COLUMN IF NOT EXISTS version INT UNSIGNED NOT NULL DEFAULT 1,
    ADD COLUMN IF NOT EXISTS edited_by BIGINT UNSIGNED NULL,
    ADD COLUMN IF NOT EXISTS edited_at DATETIME(3) NULL,
    ADD COLUMN IF NOT EXISTS published_by BIGINT UNSIGNED NULL,
    ADD COLUMN IF NOT EXISTS published_at DATETIME(3) NULL`);
  await db.raw('ALTER TABLE rule_set_versions DROP CONSTRAINT IF EXISTS rule_set_versions_state');
  await db.raw(`ALTER TABLE rule_set_versions ADD CONSTRAINT rule_set_versions_state
    CHECK (state = 'draft' OR (state = 'published' AND valid_from IS NOT NULL))`);
  await db.raw(`CREATE TABLE IF NOT EXISTS rule_confirmations (
    rule_set_version_id BIGINT UNSIGNED NOT NULL,
    question VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    confirmed_by BIGINT UNSIGNED NULL,
    confirmed_at DATETIME(3) NOT NULL,
    PRIMARY KEY (rule_set_version_id, question),
    CONSTRAINT rule_confirmations_of FOREIGN KEY (rule_set_version_id) REFERENCES rule_set_versions (id)
      ON DELETE CASCADE,
    CONSTRAINT rule_confirmations_by FOREIGN KEY (confirmed_by) REFERENCES users (id)
  )`);
  await db.raw(`CREATE OR REPLACE TRIGGER rule_set_versions_kept BEFORE UPDATE ON rule_set_versions
    FOR EACH ROW IF OLD.state = 'published' AND NOT (BINARY NEW.content = BINARY OLD.content
      AND NEW.sha256 = OLD.sha256 AND NEW.state = OLD.state AND NEW.valid_from = OLD.valid_from
      AND NEW.code = OLD.code AND NEW.number = OLD.number)
    THEN SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'published rules are never changed'; END IF`);
  await db.raw(`CREATE OR REPLACE TRIGGER rule_set_versions_used BEFORE DELETE ON rule_set_versions
    FOR EACH ROW IF OLD.first_used_at IS NOT NULL
    THEN SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'rules that were used are never deleted'; END IF`);
}

export async function down(db: Knex): Promise<void> {
  await db.raw('DROP TRIGGER IF EXISTS rule_set_versions_kept');
  await db.raw('DROP TRIGGER IF EXISTS rule_set_versions_used');
  await db.schema.dropTableIfExists('rule_confirmations');
  await db('rule_set_versions').where({ state: 'draft' }).delete();
  await db.raw('ALTER TABLE rule_set_versions DROP CONSTRAINT IF EXISTS rule_set_versions_state');
  await db.raw(`ALTER TABLE rule_set_versions
    MODIFY COLUMN valid_from DATE NOT NULL,
    DROP COLUMN IF EXISTS state, DROP COLUMN IF EXISTS version,
    DROP COLUMN IF EXISTS edited_by, DROP COLUMN IF EXISTS edited_at,
    DROP COLUMN IF EXISTS published_by, DROP COLUMN IF EXISTS published_at`);
}
