-- What the migrations make, for reading: nothing runs this file. Written by tests/support/write-schema.ts.

CREATE TABLE `application_drafts` (
  `application_id` bigint(20) unsigned NOT NULL,
  `answers` longtext NOT NULL,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  `updated_by` bigint(20) unsigned NOT NULL,
  `updated_at` datetime(3) NOT NULL,
  PRIMARY KEY (`application_id`),
  CONSTRAINT `application_drafts_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `application_revisions` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `application_id` bigint(20) unsigned NOT NULL,
  `number` int(10) unsigned NOT NULL,
  `answers` longtext NOT NULL,
  `project_sha256` binary(32) NOT NULL,
  `equipment_version_ids` longtext NOT NULL DEFAULT '[]',
  `model_id` bigint(20) unsigned NOT NULL,
  `poi_node` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `circuit` varchar(80) DEFAULT NULL,
  `attested_by` varchar(120) NOT NULL,
  `attested_user_id` bigint(20) unsigned NOT NULL,
  `attested_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `application_revisions_number` (`application_id`,`number`),
  KEY `application_revisions_project` (`project_sha256`),
  KEY `application_revisions_model` (`model_id`),
  CONSTRAINT `application_revisions_model` FOREIGN KEY (`model_id`) REFERENCES `network_models` (`id`),
  CONSTRAINT `application_revisions_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `application_revisions_project` FOREIGN KEY (`project_sha256`) REFERENCES `blobs` (`sha256`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `applications` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `number` int(10) unsigned DEFAULT NULL,
  `organisation_id` bigint(20) unsigned NOT NULL,
  `created_by` bigint(20) unsigned NOT NULL,
  `name` varchar(160) NOT NULL DEFAULT '',
  `place` varchar(200) DEFAULT NULL,
  `kind` varchar(30) DEFAULT NULL,
  `size_kw` double DEFAULT NULL,
  `export_kw` double DEFAULT NULL,
  `model_id` bigint(20) unsigned DEFAULT NULL,
  `circuit` varchar(80) DEFAULT NULL,
  `stage` varchar(30) NOT NULL,
  `waiting_on` varchar(10) NOT NULL,
  `reviewer_id` bigint(20) unsigned DEFAULT NULL,
  `revision_id` bigint(20) unsigned DEFAULT NULL,
  `run_id` bigint(20) unsigned DEFAULT NULL,
  `rule_set_version_id` bigint(20) unsigned DEFAULT NULL,
  `received_on` date DEFAULT NULL,
  `next_due_on` date DEFAULT NULL,
  `outside_count` int(10) unsigned DEFAULT NULL,
  `needs_data_count` int(10) unsigned DEFAULT NULL,
  `audit_seq` int(10) unsigned NOT NULL DEFAULT 0,
  `audit_head` binary(32) DEFAULT NULL,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  `created_at` datetime(3) NOT NULL,
  `updated_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `number` (`number`),
  KEY `applications_stage` (`stage`,`next_due_on`),
  KEY `applications_reviewer` (`reviewer_id`),
  KEY `applications_organisation` (`organisation_id`),
  KEY `applications_creator` (`created_by`),
  KEY `applications_model` (`model_id`),
  CONSTRAINT `applications_belongs` FOREIGN KEY (`organisation_id`) REFERENCES `organisations` (`id`),
  CONSTRAINT `applications_creator` FOREIGN KEY (`created_by`) REFERENCES `users` (`id`),
  CONSTRAINT `applications_model` FOREIGN KEY (`model_id`) REFERENCES `network_models` (`id`),
  CONSTRAINT `applications_reviewed_by` FOREIGN KEY (`reviewer_id`) REFERENCES `users` (`id`),
  CONSTRAINT `applications_waiting` CHECK (`waiting_on` in ('applicant','utility','nobody'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `audit_entries` (
  `chain` varchar(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `seq` int(10) unsigned NOT NULL,
  `at` datetime(3) NOT NULL,
  `actor` varchar(200) NOT NULL,
  `action` varchar(60) NOT NULL,
  `subject` varchar(120) NOT NULL,
  `before_json` longtext DEFAULT NULL,
  `after_json` longtext DEFAULT NULL,
  `ip` varchar(45) DEFAULT NULL,
  `request_id` varchar(64) DEFAULT NULL,
  `previous_hash` binary(32) NOT NULL,
  `hash` binary(32) NOT NULL,
  PRIMARY KEY (`chain`,`seq`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `blobs` (
  `sha256` binary(32) NOT NULL,
  `gzip` longblob NOT NULL,
  `raw_length` bigint(20) unsigned NOT NULL,
  PRIMARY KEY (`sha256`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `clock_pauses` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `clock_id` bigint(20) unsigned NOT NULL,
  `from_on` date NOT NULL,
  `to_on` date DEFAULT NULL,
  PRIMARY KEY (`id`),
  KEY `clock_pauses_of` (`clock_id`),
  CONSTRAINT `clock_pauses_of` FOREIGN KEY (`clock_id`) REFERENCES `clocks` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `clocks` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `application_id` bigint(20) unsigned NOT NULL,
  `kind` varchar(40) NOT NULL,
  `unit` varchar(20) NOT NULL DEFAULT 'business-day',
  `allowed_days` int(10) unsigned NOT NULL,
  `calendar_id` bigint(20) unsigned NOT NULL,
  `started_on` date NOT NULL,
  `due_on` date NOT NULL,
  `stopped_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  KEY `clocks_application` (`application_id`),
  KEY `clocks_calendar` (`calendar_id`),
  CONSTRAINT `clocks_calendar` FOREIGN KEY (`calendar_id`) REFERENCES `holiday_calendars` (`id`),
  CONSTRAINT `clocks_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `decisions` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `application_id` bigint(20) unsigned NOT NULL,
  `run_id` bigint(20) unsigned NOT NULL,
  `kind` varchar(20) NOT NULL,
  `reason` text NOT NULL,
  `conditions` text DEFAULT NULL,
  `decided_by` bigint(20) unsigned NOT NULL,
  `decided_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  KEY `decisions_application` (`application_id`),
  KEY `decisions_run` (`run_id`),
  KEY `decisions_by` (`decided_by`),
  CONSTRAINT `decisions_by` FOREIGN KEY (`decided_by`) REFERENCES `users` (`id`),
  CONSTRAINT `decisions_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `decisions_run` FOREIGN KEY (`run_id`) REFERENCES `runs` (`id`),
  CONSTRAINT `decisions_kind` CHECK (`kind` in ('approve','require-study','deny'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `equipment_versions` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `equipment_id` bigint(20) unsigned NOT NULL,
  `number` int(10) unsigned NOT NULL,
  `maker` varchar(120) NOT NULL,
  `model` varchar(120) NOT NULL,
  `kind` varchar(30) NOT NULL,
  `phases` varchar(10) NOT NULL,
  `ratings` longtext NOT NULL,
  `sha256` binary(32) NOT NULL,
  `state` varchar(20) NOT NULL DEFAULT 'released',
  `certified_until` date DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `equipment_versions_number` (`equipment_id`,`number`),
  CONSTRAINT `equipment_versions_state` CHECK (`state` in ('draft','released','withdrawn'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `files` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `organisation_id` bigint(20) unsigned NOT NULL,
  `sha256` binary(32) NOT NULL,
  `path` varchar(120) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `size_bytes` bigint(20) unsigned NOT NULL,
  `media_type` varchar(60) NOT NULL,
  `original_name` varchar(255) NOT NULL,
  `uploaded_by` bigint(20) unsigned NOT NULL,
  `uploaded_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `path` (`path`),
  KEY `files_organisation` (`organisation_id`),
  KEY `files_uploader` (`uploaded_by`),
  CONSTRAINT `files_organisation` FOREIGN KEY (`organisation_id`) REFERENCES `organisations` (`id`),
  CONSTRAINT `files_uploader` FOREIGN KEY (`uploaded_by`) REFERENCES `users` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `finding_waivers` (
  `run_id` bigint(20) unsigned NOT NULL,
  `question` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `element` varchar(200) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL DEFAULT '',
  `reason` text NOT NULL,
  `waived_by` bigint(20) unsigned NOT NULL,
  `waived_at` datetime(3) NOT NULL,
  `agreed_by` bigint(20) unsigned DEFAULT NULL,
  `agreed_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`run_id`,`question`,`element`),
  KEY `finding_waivers_by` (`waived_by`),
  KEY `finding_waivers_agreed` (`agreed_by`),
  CONSTRAINT `finding_waivers_agreed` FOREIGN KEY (`agreed_by`) REFERENCES `users` (`id`),
  CONSTRAINT `finding_waivers_by` FOREIGN KEY (`waived_by`) REFERENCES `users` (`id`),
  CONSTRAINT `finding_waivers_of` FOREIGN KEY (`run_id`) REFERENCES `runs` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `holiday_calendars` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `code` varchar(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `number` int(10) unsigned NOT NULL,
  `days` longtext NOT NULL,
  `published_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `holiday_calendars_number` (`code`,`number`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `information_requests` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `application_id` bigint(20) unsigned NOT NULL,
  `items` longtext NOT NULL,
  `asked_by` bigint(20) unsigned NOT NULL,
  `asked_at` datetime(3) NOT NULL,
  `answered_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  KEY `information_requests_application` (`application_id`),
  KEY `information_requests_by` (`asked_by`),
  CONSTRAINT `information_requests_by` FOREIGN KEY (`asked_by`) REFERENCES `users` (`id`),
  CONSTRAINT `information_requests_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `model_nodes` (
  `version_id` bigint(20) unsigned NOT NULL,
  `node_id` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `circuit` varchar(80) DEFAULT NULL,
  `kv` double NOT NULL,
  `phases` varchar(3) NOT NULL,
  `distance_km` double DEFAULT NULL,
  `place` point NOT NULL,
  PRIMARY KEY (`version_id`,`node_id`),
  CONSTRAINT `model_nodes_version` FOREIGN KEY (`version_id`) REFERENCES `model_versions` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `model_rooms` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `model_id` bigint(20) unsigned NOT NULL,
  `basis` longtext NOT NULL,
  `state` varchar(20) NOT NULL,
  `attempt` int(10) unsigned NOT NULL DEFAULT 0,
  `token` binary(16) DEFAULT NULL,
  `lease_until` datetime(3) DEFAULT NULL,
  `percent` int(10) unsigned NOT NULL DEFAULT 0,
  `room` longtext DEFAULT NULL,
  `error` text DEFAULT NULL,
  `asked_by` bigint(20) unsigned NOT NULL,
  `asked_at` datetime(3) NOT NULL,
  `queued_at` datetime(3) NOT NULL,
  `finished_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  KEY `model_rooms_model` (`model_id`,`id`),
  KEY `model_rooms_state` (`state`,`queued_at`),
  KEY `model_rooms_by` (`asked_by`),
  CONSTRAINT `model_rooms_by` FOREIGN KEY (`asked_by`) REFERENCES `users` (`id`),
  CONSTRAINT `model_rooms_of` FOREIGN KEY (`model_id`) REFERENCES `network_models` (`id`),
  CONSTRAINT `model_rooms_state_known` CHECK (`state` in ('queued','running','finished','failed'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `model_versions` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `model_id` bigint(20) unsigned NOT NULL,
  `number` int(10) unsigned NOT NULL,
  `state` varchar(20) NOT NULL,
  `parent_id` bigint(20) unsigned DEFAULT NULL,
  `model_sha256` binary(32) NOT NULL,
  `absorbs` longtext NOT NULL DEFAULT '[]',
  `published_by` bigint(20) unsigned DEFAULT NULL,
  `published_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `model_versions_number` (`model_id`,`number`),
  KEY `model_versions_blob` (`model_sha256`),
  CONSTRAINT `model_versions_blob` FOREIGN KEY (`model_sha256`) REFERENCES `blobs` (`sha256`),
  CONSTRAINT `model_versions_model` FOREIGN KEY (`model_id`) REFERENCES `network_models` (`id`),
  CONSTRAINT `model_versions_state` CHECK (`state` in ('draft','published','retired'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `network_models` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `code` varchar(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `name` varchar(160) NOT NULL,
  `substation` varchar(160) NOT NULL,
  `place` point NOT NULL,
  `published_version_id` bigint(20) unsigned DEFAULT NULL,
  `next_position` int(10) unsigned NOT NULL DEFAULT 1,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  PRIMARY KEY (`id`),
  UNIQUE KEY `code` (`code`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `organisations` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `name` varchar(160) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `name` (`name`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `outbox` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `kind` varchar(40) NOT NULL,
  `dedupe_key` varchar(160) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `application_id` bigint(20) unsigned DEFAULT NULL,
  `recipient` varchar(254) NOT NULL,
  `payload` longtext NOT NULL,
  `state` varchar(20) NOT NULL DEFAULT 'waiting',
  `attempts` int(10) unsigned NOT NULL DEFAULT 0,
  `next_at` datetime(3) NOT NULL,
  `token` binary(16) DEFAULT NULL,
  `lease_until` datetime(3) DEFAULT NULL,
  `message_id` varchar(200) DEFAULT NULL,
  `created_at` datetime(3) NOT NULL,
  `sent_at` datetime(3) DEFAULT NULL,
  `error` text DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `dedupe_key` (`dedupe_key`),
  KEY `outbox_due` (`state`,`next_at`),
  KEY `outbox_application` (`application_id`),
  CONSTRAINT `outbox_application` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `outbox_state` CHECK (`state` in ('waiting','sending','sent','parked'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `pre_application_reports` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `organisation_id` bigint(20) unsigned NOT NULL,
  `requested_by` bigint(20) unsigned NOT NULL,
  `requested_at` datetime(3) NOT NULL,
  `request` longtext NOT NULL,
  `model_version_id` bigint(20) unsigned NOT NULL,
  `node_id` varchar(120) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `circuit` varchar(60) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `rule_set_version_id` bigint(20) unsigned NOT NULL,
  `ahead_revision_ids` longtext NOT NULL,
  `figures` longtext NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  KEY `pre_application_reports_of` (`organisation_id`,`id`),
  KEY `pre_application_reports_person` (`requested_by`),
  KEY `pre_application_reports_model` (`model_version_id`),
  KEY `pre_application_reports_rules` (`rule_set_version_id`),
  CONSTRAINT `pre_application_reports_model` FOREIGN KEY (`model_version_id`) REFERENCES `model_versions` (`id`),
  CONSTRAINT `pre_application_reports_organisation` FOREIGN KEY (`organisation_id`) REFERENCES `organisations` (`id`),
  CONSTRAINT `pre_application_reports_person` FOREIGN KEY (`requested_by`) REFERENCES `users` (`id`),
  CONSTRAINT `pre_application_reports_rules` FOREIGN KEY (`rule_set_version_id`) REFERENCES `rule_set_versions` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `queue_entries` (
  `model_id` bigint(20) unsigned NOT NULL,
  `position` int(10) unsigned NOT NULL,
  `application_id` bigint(20) unsigned NOT NULL,
  `revision_id` bigint(20) unsigned NOT NULL,
  `circuit` varchar(80) DEFAULT NULL,
  `poi_node` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `entered_at` datetime(3) NOT NULL,
  `left_at` datetime(3) DEFAULT NULL,
  `reason` varchar(200) DEFAULT NULL,
  PRIMARY KEY (`model_id`,`position`),
  KEY `queue_entries_application` (`application_id`),
  KEY `queue_entries_revision` (`revision_id`),
  CONSTRAINT `queue_entries_model` FOREIGN KEY (`model_id`) REFERENCES `network_models` (`id`),
  CONSTRAINT `queue_entries_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `queue_entries_revision` FOREIGN KEY (`revision_id`) REFERENCES `application_revisions` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `revision_files` (
  `revision_id` bigint(20) unsigned NOT NULL,
  `file_id` bigint(20) unsigned NOT NULL,
  `purpose` varchar(30) NOT NULL,
  PRIMARY KEY (`revision_id`,`file_id`),
  KEY `revision_files_file` (`file_id`),
  CONSTRAINT `revision_files_file` FOREIGN KEY (`file_id`) REFERENCES `files` (`id`),
  CONSTRAINT `revision_files_revision` FOREIGN KEY (`revision_id`) REFERENCES `application_revisions` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `rule_confirmations` (
  `rule_set_version_id` bigint(20) unsigned NOT NULL,
  `question` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `confirmed_by` bigint(20) unsigned DEFAULT NULL,
  `confirmed_at` datetime(3) NOT NULL,
  PRIMARY KEY (`rule_set_version_id`,`question`),
  KEY `rule_confirmations_by` (`confirmed_by`),
  CONSTRAINT `rule_confirmations_by` FOREIGN KEY (`confirmed_by`) REFERENCES `users` (`id`),
  CONSTRAINT `rule_confirmations_of` FOREIGN KEY (`rule_set_version_id`) REFERENCES `rule_set_versions` (`id`) ON DELETE CASCADE
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `rule_set_versions` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `code` varchar(40) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `number` int(10) unsigned NOT NULL,
  `valid_from` date DEFAULT NULL,
  `content` longtext NOT NULL,
  `sha256` binary(32) NOT NULL,
  `confirmed_by` bigint(20) unsigned DEFAULT NULL,
  `confirmed_at` datetime(3) DEFAULT NULL,
  `first_used_at` datetime(3) DEFAULT NULL,
  `state` varchar(20) NOT NULL DEFAULT 'published',
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  `edited_by` bigint(20) unsigned DEFAULT NULL,
  `edited_at` datetime(3) DEFAULT NULL,
  `published_by` bigint(20) unsigned DEFAULT NULL,
  `published_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `rule_set_versions_number` (`code`,`number`),
  CONSTRAINT `rule_set_versions_state` CHECK (`state` = 'draft' or `state` = 'published' and `valid_from` is not null)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `run_findings` (
  `run_id` bigint(20) unsigned NOT NULL,
  `seq` int(10) unsigned NOT NULL,
  `question` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `element` varchar(200) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL DEFAULT '',
  `verdict` varchar(20) NOT NULL,
  `value` double DEFAULT NULL,
  `before_value` double DEFAULT NULL,
  `comparison` varchar(4) NOT NULL,
  `limit_value` double DEFAULT NULL,
  `unit` varchar(20) NOT NULL,
  `consequence` varchar(20) NOT NULL,
  `source` varchar(400) NOT NULL,
  `detail` longtext NOT NULL,
  PRIMARY KEY (`run_id`,`seq`),
  CONSTRAINT `run_findings_of` FOREIGN KEY (`run_id`) REFERENCES `runs` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `runs` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `application_id` bigint(20) unsigned NOT NULL,
  `kind` varchar(20) NOT NULL,
  `basis` longtext NOT NULL,
  `basis_sha256` binary(32) NOT NULL,
  `study_sha256` binary(32) DEFAULT NULL,
  `result_sha256` binary(32) DEFAULT NULL,
  `results_version` int(10) unsigned NOT NULL,
  `state` varchar(20) NOT NULL,
  `attempt` int(10) unsigned NOT NULL DEFAULT 0,
  `token` binary(16) DEFAULT NULL,
  `lease_until` datetime(3) DEFAULT NULL,
  `next_attempt_at` datetime(3) DEFAULT NULL,
  `steps` longtext NOT NULL DEFAULT '[]',
  `summary` longtext DEFAULT NULL,
  `warnings` longtext DEFAULT NULL,
  `error` text DEFAULT NULL,
  `error_detail` text DEFAULT NULL,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  `queued_at` datetime(3) NOT NULL,
  `started_at` datetime(3) DEFAULT NULL,
  `finished_at` datetime(3) DEFAULT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  KEY `runs_application` (`application_id`,`id`),
  KEY `runs_state` (`state`,`queued_at`),
  KEY `runs_basis` (`basis_sha256`),
  KEY `runs_study` (`study_sha256`),
  KEY `runs_result` (`result_sha256`),
  CONSTRAINT `runs_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `runs_result` FOREIGN KEY (`result_sha256`) REFERENCES `blobs` (`sha256`),
  CONSTRAINT `runs_study` FOREIGN KEY (`study_sha256`) REFERENCES `blobs` (`sha256`),
  CONSTRAINT `runs_kind` CHECK (`kind` in ('preliminary','official')),
  CONSTRAINT `runs_state_known` CHECK (`state` in ('queued','running','finished','failed'))
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `sessions` (
  `sid` varchar(255) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `sess` longtext NOT NULL,
  `expired` datetime(3) NOT NULL,
  PRIMARY KEY (`sid`),
  KEY `sessions_expired` (`expired`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `settings` (
  `name` varchar(80) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `value` longtext NOT NULL,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  PRIMARY KEY (`name`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `stage_events` (
  `application_id` bigint(20) unsigned NOT NULL,
  `seq` int(10) unsigned NOT NULL,
  `event` varchar(30) NOT NULL,
  `from_stage` varchar(30) DEFAULT NULL,
  `to_stage` varchar(30) NOT NULL,
  `actor_id` bigint(20) unsigned DEFAULT NULL,
  `note` text DEFAULT NULL,
  `at` datetime(3) NOT NULL,
  PRIMARY KEY (`application_id`,`seq`),
  KEY `stage_events_actor` (`actor_id`),
  CONSTRAINT `stage_events_actor` FOREIGN KEY (`actor_id`) REFERENCES `users` (`id`),
  CONSTRAINT `stage_events_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `users` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `organisation_id` bigint(20) unsigned DEFAULT NULL,
  `email` varchar(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `name` varchar(160) NOT NULL,
  `password_hash` varchar(255) NOT NULL,
  `role` varchar(20) NOT NULL,
  `disabled_at` datetime(3) DEFAULT NULL,
  `version` int(10) unsigned NOT NULL DEFAULT 1,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `email` (`email`),
  KEY `users_organisation` (`organisation_id`),
  CONSTRAINT `users_organisation` FOREIGN KEY (`organisation_id`) REFERENCES `organisations` (`id`),
  CONSTRAINT `users_role` CHECK (`role` in ('applicant','reviewer','planner','administrator','auditor')),
  CONSTRAINT `users_applicant_belongs` CHECK (`role` <> 'applicant' or `organisation_id` is not null)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TABLE `variants` (
  `id` bigint(20) unsigned NOT NULL AUTO_INCREMENT,
  `public_id` varchar(32) CHARACTER SET utf8mb4 COLLATE utf8mb4_bin NOT NULL,
  `application_id` bigint(20) unsigned NOT NULL,
  `run_id` bigint(20) unsigned NOT NULL,
  `name` varchar(120) NOT NULL,
  `changes` longtext NOT NULL,
  `findings` longtext NOT NULL,
  `kept_by` bigint(20) unsigned NOT NULL,
  `kept_at` datetime(3) NOT NULL,
  PRIMARY KEY (`id`),
  UNIQUE KEY `public_id` (`public_id`),
  UNIQUE KEY `variants_name` (`application_id`,`name`),
  KEY `variants_run` (`run_id`),
  KEY `variants_by` (`kept_by`),
  CONSTRAINT `variants_by` FOREIGN KEY (`kept_by`) REFERENCES `users` (`id`),
  CONSTRAINT `variants_of` FOREIGN KEY (`application_id`) REFERENCES `applications` (`id`),
  CONSTRAINT `variants_run` FOREIGN KEY (`run_id`) REFERENCES `runs` (`id`)
) ENGINE=InnoDB DEFAULT CHARSET=utf8mb4 COLLATE=utf8mb4_unicode_ci;

CREATE TRIGGER audit_entries_no_update BEFORE UPDATE ON audit_entries FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'audit entries are never changed';

CREATE TRIGGER audit_entries_no_delete BEFORE DELETE ON audit_entries FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'audit entries are never deleted';

CREATE TRIGGER rule_set_versions_kept BEFORE UPDATE ON rule_set_versions FOR EACH ROW IF OLD.state = 'published' AND NOT (BINARY NEW.content = BINARY OLD.content
      AND NEW.sha256 = OLD.sha256 AND NEW.state = OLD.state AND NEW.valid_from = OLD.valid_from
      AND NEW.code = OLD.code AND NEW.number = OLD.number)
    THEN SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'published rules are never changed'; END IF;

CREATE TRIGGER rule_set_versions_used BEFORE DELETE ON rule_set_versions FOR EACH ROW IF OLD.first_used_at IS NOT NULL
    THEN SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'rules that were used are never deleted'; END IF;
