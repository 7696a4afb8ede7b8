import * as createPeople from './20261201100000_create_people.ts';
import * as createStorage from './20261201100100_create_storage.ts';
import * as createNetworkModels from './20261201100200_create_network_models.ts';
import * as createReference from './20261201100300_create_reference.ts';
import * as createApplications from './20261201100400_create_applications.ts';
import * as createStageEvents from './20261201100500_create_stage_events.ts';
import * as createRuns from './20261201100600_create_runs.ts';
import * as createOutbox from './20261201100700_create_outbox.ts';
import * as createAuditEntries from './20261201100800_create_audit_entries.ts';

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
] as const;
