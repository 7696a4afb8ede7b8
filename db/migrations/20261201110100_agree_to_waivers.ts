import type { Knex } from 'knex';

/** Where a rule asks for a second person, what one has set aside counts only once another has agreed. */
export async function up(db: Knex): Promise<void> {
  await db.raw(`ALTER TABLE finding_waivers
    ADD COLUMN IF NOT EXISTS agreed_by BIGINT UNSIGNED NULL,
    ADD COLUMN IF NOT EXISTS agreed_at DATETIME(3) NULL`);
  await db.raw('ALTER TABLE finding_waivers DROP FOREIGN KEY IF EXISTS finding_waivers_agreed');
  await db.raw(`ALTER TABLE finding_waivers ADD CONSTRAINT finding_waivers_agreed
    FOREIGN KEY (agreed_by) REFERENCES users (id)`);
}

export async function down(db: Knex): Promise<void> {
  await db.raw('ALTER TABLE finding_waivers DROP FOREIGN KEY IF EXISTS finding_waivers_agreed');
  await db.raw(`ALTER TABLE finding_waivers
    DROP COLUMN IF EXISTS agreed_by, DROP COLUMN IF EXISTS agreed_at`);
}
