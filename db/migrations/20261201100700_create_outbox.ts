import type { Knex } from 'knex';

/** Mail to be sent, written in the transaction that causes it; the Message-ID is made from the row. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS outbox (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    kind VARCHAR(40) NOT NULL,
    dedupe_key VARCHAR(160) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    application_id BIGINT UNSIGNED NULL,
    recipient VARCHAR(254) NOT NULL,
    payload LONGTEXT NOT NULL,
    state VARCHAR(20) NOT NULL DEFAULT 'waiting',
    attempts INT UNSIGNED NOT NULL DEFAULT 0,
    next_at DATETIME(3) NOT NULL,
    token BINARY(16) NULL,
    lease_until DATETIME(3) NULL,
    message_id VARCHAR(200) NULL,
    created_at DATETIME(3) NOT NULL,
    sent_at DATETIME(3) NULL,
    error TEXT NULL,
    INDEX outbox_due (state, next_at),
    CONSTRAINT outbox_application FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT outbox_state CHECK (state IN ('waiting','sending','sent','parked'))
  )`);
}

export async function down(db: Knex): Promise<void> {
  await db.schema.dropTableIfExists('outbox');
}
