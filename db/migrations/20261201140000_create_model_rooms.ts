import type { Knex } from 'knex';

/** How much more could connect at each node of a model: one row a computation, with the ids it rests on. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS model_rooms (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    public_id VARCHAR(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL UNIQUE,
    model_id BIGINT UNSIGNED NOT NULL,
    basis LONGTEXT NOT NULL,
    state VARCHAR(20) NOT NULL,
    attempt INT UNSIGNED NOT NULL DEFAULT 0,
    token BINARY(16) NULL,
    lease_until DATETIME(3) NULL,
    percent INT UNSIGNED NOT NULL DEFAULT 0,
    room LONGTEXT NULL,
    error TEXT NULL,
    asked_by BIGINT UNSIGNED NOT NULL,
    asked_at DATETIME(3) NOT NULL,
    queued_at DATETIME(3) NOT NULL,
    finished_at DATETIME(3) NULL,
    INDEX model_rooms_model (model_id, id),
    INDEX model_rooms_state (state, queued_at),
    CONSTRAINT model_rooms_of FOREIGN KEY (model_id) REFERENCES network_models (id),
    CONSTRAINT model_rooms_by FOREIGN KEY (asked_by) REFERENCES users (id),
    CONSTRAINT model_rooms_state_known CHECK (state IN ('queued','running','finished','failed'))
  )`);
}

export async function down(db: Knex): Promise<void> {
  await db.schema.dropTableIfExists('model_rooms');
}
