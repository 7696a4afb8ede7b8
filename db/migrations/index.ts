import * as createPeople from './20261201100000_create_people.ts';
import * as createStorage from './20261201100100_create_storage.ts';
import * as createNetworkModels from './20261201100200_create_network_models.ts';
import * as createReference from './20261201100300_create_reference.ts';
import * as createApplications from './20261201100400_create_applications.ts';
import * as createStageEvents from './20261201100500_create_stage_events.ts';
import * as createRuns from './20261201100600_create_runs.ts';
import * as createOutbox from './20261201100700_create_outbox.ts';
import * as createAuditEntries from './20261201100800_create_audit_entries.ts';
import * as createPreApplicationReports from './20261201120000_create_pre_application_reports.ts';
import * as versionRuleSets from './20261201110000_version_rule_sets.ts';
import * as agreeToWaivers from './20261201110100_agree_to_waivers.ts';
import * as createVariants from './20261201130000_create_variants.ts';
import * as createModelRooms from './20261201140000_create_model_rooms.ts';

/** In order. A static list, because a directory of .ts files fails in a bundle and under the test runner. */
export const migrations = [
  { name: '20261201100000_create_people', migration: createPeople },
  { name: '20261201100100_create_storage', migration: createStorage },
  { name: '20261201100200_create_network_models', migration: createNetworkModels },
  { name: '20261201100300_create_reference', migration: createReference },
  { name: '20261201100400_create_applications', migration: createApplications },
  { name: '20261201100500_create_stage_events', migration: createStageEvents },
  { name: '20261201100600_create_runs', migration: createRuns },
  { name: '20261201100700_create_outbox', migration: createOutbox },
  { name: '20261201100800_create_audit_entries', migration: createAuditEntries },
  { name: '20261201120000_create_pre_application_reports', migration: createPreApplicationReports },
  { name: '20261201110000_version_rule_sets', migration: versionRuleSets },
  { name: '20261201110100_agree_to_waivers', migration: agreeToWaivers },
  { name: '20261201130000_create_variants', migration: createVariants },
  { name: '20261201140000_create_model_rooms', migration: createModelRooms },
] as const;
