import type { Knex } from 'knex';

/** What happened to an application, its place in the queue, its clocks, and what was asked of the applicant. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`CREATE TABLE IF NOT EXISTS stage_events (
    application_id BIGINT UNSIGNED NOT NULL,
    seq INT UNSIGNED NOT NULL,
    event VARCHAR(30) NOT NULL,
    from_stage VARCHAR(30) NULL,
    to_stage VARCHAR(30) NOT NULL,
    actor_id BIGINT UNSIGNED NULL,
    note TEXT NULL,
    at DATETIME(3) NOT NULL,
    PRIMARY KEY (application_id, seq),
    CONSTRAINT stage_events_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT stage_events_actor FOREIGN KEY (actor_id) REFERENCES users (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS queue_entries (
    model_id BIGINT UNSIGNED NOT NULL,
    position INT UNSIGNED NOT NULL,
    application_id BIGINT UNSIGNED NOT NULL,
    revision_id BIGINT UNSIGNED NOT NULL,
    circuit VARCHAR(80) NULL,
    poi_node VARCHAR(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
    entered_at DATETIME(3) NOT NULL,
    left_at DATETIME(3) NULL,
    reason VARCHAR(200) NULL,
    PRIMARY KEY (model_id, position),
    INDEX queue_entries_application (application_id),
    CONSTRAINT queue_entries_model FOREIGN KEY (model_id) REFERENCES network_models (id),
    CONSTRAINT queue_entries_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT queue_entries_revision FOREIGN KEY (revision_id) REFERENCES application_revisions (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS clocks (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    application_id BIGINT UNSIGNED NOT NULL,
    kind VARCHAR(40) NOT NULL,
    unit VARCHAR(20) NOT NULL DEFAULT 'business-day',
    allowed_days INT UNSIGNED NOT NULL,
    calendar_id BIGINT UNSIGNED NOT NULL,
    started_on DATE NOT NULL,
    due_on DATE NOT NULL,
    stopped_at DATETIME(3) NULL,
    INDEX clocks_application (application_id),
    CONSTRAINT clocks_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT clocks_calendar FOREIGN KEY (calendar_id) REFERENCES holiday_calendars (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS clock_pauses (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    clock_id BIGINT UNSIGNED NOT NULL,
    from_on DATE NOT NULL,
    to_on DATE NULL,
    CONSTRAINT clock_pauses_of FOREIGN KEY (clock_id) REFERENCES clocks (id)
  )`);
  await db.raw(`CREATE TABLE IF NOT EXISTS information_requests (
    id BIGINT UNSIGNED NOT NULL AUTO_INCREMENT PRIMARY KEY,
    application_id BIGINT UNSIGNED NOT NULL,
    items LONGTEXT NOT NULL,
    asked_by BIGINT UNSIGNED NOT NULL,
    asked_at DATETIME(3) NOT NULL,
    answered_at DATETIME(3) NULL,
    INDEX information_requests_application (application_id),
    CONSTRAINT information_requests_of FOREIGN KEY (application_id) REFERENCES applications (id),
    CONSTRAINT information_requests_by FOREIGN KEY (asked_by) REFERENCES users (id)
  )`);
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['information_requests', 'clock_pauses', 'clocks', 'queue_entries', 'stage_events'])
    await db.schema.dropTableIfExists(table);
}
