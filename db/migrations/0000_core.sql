ALTER DATABASE CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin;--> statement-breakpoint
CREATE TABLE `case_notes` (
	`id` uuid NOT NULL,
	`case_id` uuid NOT NULL,
	`person_id` uuid NOT NULL,
	`body` text NOT NULL,
	`written_at` datetime(3) NOT NULL,
	CONSTRAINT `case_notes_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `cases` (
	`id` uuid NOT NULL,
	`number` bigint AUTO_INCREMENT NOT NULL,
	`transaction_id` uuid NOT NULL,
	`kind` enum('alert','sample','sibling') NOT NULL,
	`state` enum('open','claimed','waiting','escalated','decided','lapsed') NOT NULL,
	`zone` enum('pass','review','hold') NOT NULL,
	`score_id` bigint NOT NULL,
	`policy_version` int NOT NULL,
	`sample_probability` double,
	`opened_at` datetime(3) NOT NULL,
	`due_at` datetime(3) NOT NULL,
	`lapses_at` datetime(3) NOT NULL,
	`assigned_to` uuid,
	`claimed_by` uuid,
	`claimed_at` datetime(3),
	`claim_expires_at` datetime(3),
	`wait_until` datetime(3),
	`decided_at` datetime(3),
	`revision` int NOT NULL DEFAULT 1,
	`changed_at` datetime(3) NOT NULL,
	CONSTRAINT `cases_id` PRIMARY KEY(`id`),
	CONSTRAINT `cases_number_unique` UNIQUE(`number`),
	CONSTRAINT `cases_transaction` UNIQUE(`transaction_id`),
	CONSTRAINT `cases_claim` CHECK((`cases`.`state` = 'claimed') = (`cases`.`claimed_by` is not null)),
	CONSTRAINT `cases_decided` CHECK((`cases`.`state` = 'decided') = (`cases`.`decided_at` is not null)),
	CONSTRAINT `cases_sample` CHECK((`cases`.`kind` = 'sample') = (`cases`.`sample_probability` is not null)),
	CONSTRAINT `cases_sample_range` CHECK(`cases`.`sample_probability` > 0 and `cases`.`sample_probability` <= 1)
);
--> statement-breakpoint
CREATE TABLE `decisions` (
	`id` uuid NOT NULL,
	`case_id` uuid NOT NULL,
	`transaction_id` uuid NOT NULL,
	`kind` enum('decision','correction','second_review','adjudication') NOT NULL,
	`person_id` uuid NOT NULL,
	`api_key_id` uuid,
	`verdict` enum('fraudulent','legitimate','customer_misuse') NOT NULL,
	`typology` enum('lost_or_stolen','not_received','counterfeit','details_theft','issued_by_fraudster','modified_by_fraudster','payer_manipulated','other'),
	`confidence` enum('sure','unsure') NOT NULL,
	`reason` text,
	`decided_at` datetime(3) NOT NULL,
	`undo_until` datetime(3) NOT NULL,
	`undone_at` datetime(3),
	`superseded_at` datetime(3),
	`stands_for_case_id` uuid GENERATED ALWAYS AS ((if(undone_at is null and superseded_at is null, case_id, null))) STORED,
	`score_id` bigint NOT NULL,
	`evidence` varbinary(4096) NOT NULL,
	`score_was_hidden` tinyint NOT NULL DEFAULT 0,
	`scorer_version_before` bigint NOT NULL,
	`scorer_version_after` bigint NOT NULL,
	`policy_version` int NOT NULL,
	`zone` enum('pass','review','hold') NOT NULL,
	`act_id` uuid NOT NULL,
	`handling_seconds` int NOT NULL,
	CONSTRAINT `decisions_id` PRIMARY KEY(`id`),
	CONSTRAINT `decisions_standing` UNIQUE(`stands_for_case_id`),
	CONSTRAINT `decisions_typology` CHECK((`decisions`.`verdict` = 'fraudulent') = (`decisions`.`typology` is not null)),
	CONSTRAINT `decisions_handling` CHECK(`decisions`.`handling_seconds` >= 0)
);
--> statement-breakpoint
CREATE TABLE `job_runs` (
	`job` varchar(64) NOT NULL,
	`slot` varchar(64) NOT NULL,
	`started_at` datetime(3) NOT NULL,
	`finished_at` datetime(3),
	`problem` varchar(400),
	CONSTRAINT `job_runs_job_slot_pk` PRIMARY KEY(`job`,`slot`)
);
--> statement-breakpoint
CREATE TABLE `ledger` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`transaction_id` uuid NOT NULL,
	`decision_id` uuid,
	`outcome_id` uuid,
	`reverses_id` bigint,
	`booked_at` datetime(3) NOT NULL,
	`occurred_at` datetime(3) NOT NULL,
	`attempted_minor` bigint NOT NULL,
	`prevented_minor` bigint NOT NULL,
	`missed_minor` bigint NOT NULL,
	`recovered_minor` bigint NOT NULL,
	`false_positive_minor` bigint NOT NULL,
	`lost_margin_minor` bigint NOT NULL,
	`review_cost_minor` bigint NOT NULL,
	`typology` enum('lost_or_stolen','not_received','counterfeit','details_theft','issued_by_fraudster','modified_by_fraudster','payer_manipulated','other'),
	`detail` json,
	CONSTRAINT `ledger_id` PRIMARY KEY(`id`),
	CONSTRAINT `ledger_reverses` UNIQUE(`reverses_id`)
);
--> statement-breakpoint
CREATE TABLE `note_drafts` (
	`case_id` uuid NOT NULL,
	`person_id` uuid NOT NULL,
	`body` text NOT NULL,
	`saved_at` datetime(3) NOT NULL,
	CONSTRAINT `note_drafts_case_id_person_id_pk` PRIMARY KEY(`case_id`,`person_id`)
);
--> statement-breakpoint
CREATE TABLE `outbox` (
	`id` uuid NOT NULL,
	`dedupe_key` varchar(160) NOT NULL,
	`kind` enum('weekly_summary','case_assigned','approval_wanted','deadline_digest') NOT NULL,
	`person_id` uuid NOT NULL,
	`recipient` varchar(254) NOT NULL,
	`subject` varchar(200) NOT NULL,
	`html` text NOT NULL,
	`text` text NOT NULL,
	`headers` json NOT NULL,
	`message_id` varchar(120) NOT NULL,
	`state` enum('queued','sending','sent','failed','uncertain') NOT NULL,
	`attempts` int NOT NULL DEFAULT 0,
	`next_attempt_at` datetime(3) NOT NULL,
	`lease_owner` varchar(64),
	`created_at` datetime(3) NOT NULL,
	`sent_at` datetime(3),
	`problem` varchar(400),
	CONSTRAINT `outbox_id` PRIMARY KEY(`id`),
	CONSTRAINT `outbox_dedupe` UNIQUE(`dedupe_key`)
);
--> statement-breakpoint
CREATE TABLE `summary_recipients` (
	`person_id` uuid NOT NULL,
	`weekday` tinyint NOT NULL,
	`hour` tinyint NOT NULL,
	`subscribed` tinyint NOT NULL DEFAULT 1,
	`unsubscribe_hash` binary(32),
	`changed_at` datetime(3) NOT NULL,
	CONSTRAINT `summary_recipients_person_id` PRIMARY KEY(`person_id`)
);
--> statement-breakpoint
CREATE TABLE `outcomes` (
	`id` uuid NOT NULL,
	`external_id` varchar(64) NOT NULL,
	`transaction_id` uuid,
	`kind` enum('chargeback','customer_report','recovery','cleared') NOT NULL,
	`reason_family` enum('fraud','service','processing','other'),
	`stage` enum('opened','represented','won','lost','withdrawn'),
	`bearer` enum('institution','customer','merchant','other'),
	`occurred_at` datetime(3) NOT NULL,
	`received_at` datetime(3) NOT NULL,
	`amount_minor` bigint,
	`currency` char(3),
	`reference` varchar(64),
	`content_hash` binary(32) NOT NULL,
	`applied_at` datetime(3),
	CONSTRAINT `outcomes_id` PRIMARY KEY(`id`),
	CONSTRAINT `outcomes_content` UNIQUE(`content_hash`)
);
--> statement-breakpoint
CREATE TABLE `api_keys` (
	`id` uuid NOT NULL,
	`name` varchar(80) NOT NULL,
	`source` varchar(64) NOT NULL,
	`hash` binary(32) NOT NULL,
	`scopes` json NOT NULL,
	`acts_for_person_id` uuid,
	`created_at` datetime(3) NOT NULL,
	`last_used_at` datetime(3),
	`revoked_at` datetime(3),
	CONSTRAINT `api_keys_id` PRIMARY KEY(`id`),
	CONSTRAINT `api_keys_hash` UNIQUE(`hash`),
	CONSTRAINT `api_keys_name` UNIQUE(`name`)
);
--> statement-breakpoint
CREATE TABLE `idempotency_keys` (
	`actor` varchar(80) NOT NULL,
	`key` varchar(128) NOT NULL,
	`request_hash` binary(32) NOT NULL,
	`status` int,
	`answer` json,
	`complete` tinyint NOT NULL DEFAULT 0,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `idempotency_keys_actor_key_pk` PRIMARY KEY(`actor`,`key`)
);
--> statement-breakpoint
CREATE TABLE `people` (
	`id` uuid NOT NULL,
	`email` varchar(254) NOT NULL,
	`name` varchar(120) NOT NULL,
	`password_hash` varchar(255) NOT NULL,
	`password_is_one_time` tinyint NOT NULL DEFAULT 0,
	`state` enum('active','deactivated') NOT NULL DEFAULT 'active',
	`session_version` int NOT NULL DEFAULT 1,
	`failed_sign_ins` int NOT NULL DEFAULT 0,
	`locked_until` datetime(3),
	`time_zone` varchar(64) NOT NULL DEFAULT 'UTC',
	`created_at` datetime(3) NOT NULL,
	`last_sign_in_at` datetime(3),
	CONSTRAINT `people_id` PRIMARY KEY(`id`),
	CONSTRAINT `people_email` UNIQUE(`email`),
	CONSTRAINT `people_email_lower` CHECK(`people`.`email` = lower(`people`.`email`))
);
--> statement-breakpoint
CREATE TABLE `person_roles` (
	`person_id` uuid NOT NULL,
	`role` enum('reviewer','supervisor','risk_manager','auditor','administrator') NOT NULL,
	`granted_at` datetime(3) NOT NULL,
	`granted_by` uuid,
	CONSTRAINT `person_roles_person_id_role_pk` PRIMARY KEY(`person_id`,`role`)
);
--> statement-breakpoint
CREATE TABLE `settings` (
	`key` varchar(64) NOT NULL,
	`value` json NOT NULL,
	`changed_at` datetime(3) NOT NULL,
	CONSTRAINT `settings_key` PRIMARY KEY(`key`)
);
--> statement-breakpoint
CREATE TABLE `policies` (
	`id` uuid NOT NULL,
	`version` int,
	`state` enum('proposed','approved','declined','withdrawn') NOT NULL,
	`terms` json NOT NULL,
	`based_on_version` int,
	`reason` text NOT NULL,
	`proposed_by` uuid,
	`proposed_at` datetime(3) NOT NULL,
	`settled_by` uuid,
	`settled_at` datetime(3),
	`effective_at` datetime(3),
	`revision` int NOT NULL DEFAULT 1,
	CONSTRAINT `policies_id` PRIMARY KEY(`id`),
	CONSTRAINT `policies_version` UNIQUE(`version`)
);
--> statement-breakpoint
CREATE TABLE `policy_cuts` (
	`policy_version` int NOT NULL,
	`computed_at` datetime(3) NOT NULL,
	`logit` double NOT NULL,
	`score_count` int NOT NULL,
	`last_score_id` bigint NOT NULL,
	CONSTRAINT `policy_cuts_policy_version_computed_at_pk` PRIMARY KEY(`policy_version`,`computed_at`)
);
--> statement-breakpoint
CREATE TABLE `label_log` (
	`seq` bigint NOT NULL,
	`place` bigint,
	`kind` enum('decision','undo','second_review','adjudication','outcome','correction','removal') NOT NULL,
	`transaction_id` uuid NOT NULL,
	`case_id` uuid,
	`decision_id` uuid,
	`outcome_id` uuid,
	`person_id` uuid,
	`label` tinyint NOT NULL,
	`weight` binary(8) NOT NULL,
	`vector` varbinary(4096) NOT NULL,
	`signal_set_version` int NOT NULL,
	`loss` binary(8),
	`scorer_version` bigint NOT NULL,
	`at` datetime(3) NOT NULL,
	CONSTRAINT `label_log_seq` PRIMARY KEY(`seq`),
	CONSTRAINT `label_log_label` CHECK(`label_log`.`label` in (-1, 0, 1)),
	CONSTRAINT `label_log_place_earlier` CHECK(`label_log`.`place` < `label_log`.`seq`)
);
--> statement-breakpoint
CREATE TABLE `scorer_snapshots` (
	`scorer_id` uuid NOT NULL,
	`place` bigint NOT NULL,
	`state` longblob NOT NULL,
	CONSTRAINT `scorer_snapshots_scorer_id_place_pk` PRIMARY KEY(`scorer_id`,`place`)
);
--> statement-breakpoint
CREATE TABLE `scorers` (
	`id` uuid NOT NULL,
	`name` varchar(80) NOT NULL,
	`method` varchar(32) NOT NULL,
	`role` enum('in_use','candidate','retired') NOT NULL,
	`in_use` tinyint GENERATED ALWAYS AS ((if(role = 'in_use', 1, null))) STORED,
	`signal_set_version` int NOT NULL,
	`options` json NOT NULL,
	`version` bigint NOT NULL,
	`log_seq` bigint NOT NULL,
	`state` longblob NOT NULL,
	`cumulative_loss` binary(8) NOT NULL,
	`changed_at` datetime(3) NOT NULL,
	CONSTRAINT `scorers_id` PRIMARY KEY(`id`),
	CONSTRAINT `scorers_in_use` UNIQUE(`in_use`)
);
--> statement-breakpoint
CREATE TABLE `signal_refreshes` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`transaction_id` uuid NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `signal_refreshes_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `trail` (
	`seq` bigint NOT NULL,
	`at` datetime(3) NOT NULL,
	`act` varchar(64) NOT NULL,
	`actor_kind` enum('person','key','system','anonymous') NOT NULL,
	`actor_id` varchar(64) NOT NULL,
	`on_behalf_of` uuid,
	`subject_kind` varchar(32) NOT NULL,
	`subject_id` varchar(64) NOT NULL,
	`case_id` uuid,
	`request_id` varchar(64) NOT NULL,
	`facts` text NOT NULL,
	`previous_hash` binary(32) NOT NULL,
	`hash` binary(32) NOT NULL,
	CONSTRAINT `trail_seq` PRIMARY KEY(`seq`)
);
--> statement-breakpoint
CREATE TABLE `trail_head` (
	`id` int NOT NULL,
	`seq` bigint NOT NULL,
	`hash` binary(32) NOT NULL,
	CONSTRAINT `trail_head_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `currency_rates` (
	`currency` char(3) NOT NULL,
	`day` date NOT NULL,
	`rate` double NOT NULL,
	CONSTRAINT `currency_rates_currency_day_pk` PRIMARY KEY(`currency`,`day`)
);
--> statement-breakpoint
CREATE TABLE `import_chunks` (
	`import_id` uuid NOT NULL,
	`part` int NOT NULL,
	`content` longblob NOT NULL,
	CONSTRAINT `import_chunks_import_id_part_pk` PRIMARY KEY(`import_id`,`part`)
);
--> statement-breakpoint
CREATE TABLE `import_errors` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`import_id` uuid NOT NULL,
	`row` int NOT NULL,
	`external_id` varchar(64),
	`path` varchar(120) NOT NULL,
	`message` varchar(400) NOT NULL,
	CONSTRAINT `import_errors_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `imports` (
	`id` uuid NOT NULL,
	`source` varchar(64) NOT NULL,
	`file_name` varchar(255) NOT NULL,
	`mapping` json NOT NULL,
	`state` enum('receiving','queued','running','done','failed') NOT NULL,
	`person_id` uuid,
	`created_at` datetime(3) NOT NULL,
	`finished_at` datetime(3),
	`size_bytes` bigint NOT NULL DEFAULT 0,
	`read_bytes` bigint NOT NULL DEFAULT 0,
	`rows_done` int NOT NULL DEFAULT 0,
	`created` int NOT NULL DEFAULT 0,
	`duplicates` int NOT NULL DEFAULT 0,
	`rejected` int NOT NULL DEFAULT 0,
	`cases_opened` int NOT NULL DEFAULT 0,
	`problem` varchar(400),
	`lease_owner` varchar(64),
	`lease_expires_at` datetime(3),
	CONSTRAINT `imports_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `labelled_entities` (
	`entity_kind` enum('account','counterparty','card','device') NOT NULL,
	`entity_key` varchar(64) NOT NULL,
	`transaction_id` uuid NOT NULL,
	`label` tinyint NOT NULL,
	`occurred_at` datetime(3) NOT NULL,
	`labelled_at` datetime(3) NOT NULL,
	CONSTRAINT `labelled_entities_entity_kind_entity_key_transaction_id_pk` PRIMARY KEY(`entity_kind`,`entity_key`,`transaction_id`)
);
--> statement-breakpoint
CREATE TABLE `scores` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`transaction_id` uuid NOT NULL,
	`kind` enum('arrival','refresh') NOT NULL,
	`taken_at` datetime(3) NOT NULL,
	`vector` varbinary(4096) NOT NULL,
	`missing` varbinary(64) NOT NULL,
	`signal_set_version` int NOT NULL,
	`scorer_version` bigint NOT NULL,
	`policy_version` int NOT NULL,
	`logit` double NOT NULL,
	`leverage` double NOT NULL,
	`zone` enum('pass','review','hold') NOT NULL,
	CONSTRAINT `scores_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `signal_sets` (
	`version` int NOT NULL,
	`definition` json NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `signal_sets_version` PRIMARY KEY(`version`)
);
--> statement-breakpoint
CREATE TABLE `transactions` (
	`id` uuid NOT NULL,
	`seq` bigint AUTO_INCREMENT NOT NULL,
	`source` varchar(64) NOT NULL,
	`external_id` varchar(64) NOT NULL,
	`content_hash` binary(32) NOT NULL,
	`received_at` datetime(3) NOT NULL,
	`occurred_at` datetime(3) NOT NULL,
	`amount_minor` bigint NOT NULL,
	`currency` char(3) NOT NULL,
	`amount_base_minor` bigint,
	`direction` enum('outgoing','incoming') NOT NULL,
	`channel` enum('card_present','card_remote','cash_withdrawal','credit_transfer','instant_transfer','direct_debit') NOT NULL,
	`remote` tinyint,
	`account_id` varchar(64) NOT NULL,
	`counterparty_id` varchar(64) NOT NULL,
	`counterparty_name` varchar(140),
	`card_ref` varchar(64),
	`device_id` varchar(64),
	`ip_address` varchar(45),
	`mcc` char(4),
	`counterparty_country` char(2),
	`account_country` char(2),
	`authentication` enum('strong','single','none','exempt'),
	`account_opened_at` datetime(3),
	`upstream_score` double,
	`rule_hits` json,
	`attributes` json,
	`action` enum('pass','review','hold') NOT NULL,
	`payment_state` enum('pending','held','released','refused','settled','recalled','unknown') NOT NULL,
	`hold_expires_at` datetime(3),
	`label` tinyint,
	CONSTRAINT `transactions_id` PRIMARY KEY(`id`),
	CONSTRAINT `transactions_seq_unique` UNIQUE(`seq`),
	CONSTRAINT `transactions_external` UNIQUE(`source`,`external_id`),
	CONSTRAINT `transactions_amount` CHECK(`transactions`.`amount_minor` >= 0),
	CONSTRAINT `transactions_label` CHECK(`transactions`.`label` in (-1, 1)),
	CONSTRAINT `transactions_upstream` CHECK(`transactions`.`upstream_score` between 0 and 1)
);
--> statement-breakpoint
ALTER TABLE `case_notes` ADD CONSTRAINT `case_notes_case_id_cases_id_fk` FOREIGN KEY (`case_id`) REFERENCES `cases`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `case_notes` ADD CONSTRAINT `case_notes_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `cases` ADD CONSTRAINT `cases_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `cases` ADD CONSTRAINT `cases_score_id_scores_id_fk` FOREIGN KEY (`score_id`) REFERENCES `scores`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `cases` ADD CONSTRAINT `cases_assigned_to_people_id_fk` FOREIGN KEY (`assigned_to`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `cases` ADD CONSTRAINT `cases_claimed_by_people_id_fk` FOREIGN KEY (`claimed_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `decisions` ADD CONSTRAINT `decisions_case_id_cases_id_fk` FOREIGN KEY (`case_id`) REFERENCES `cases`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `decisions` ADD CONSTRAINT `decisions_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `decisions` ADD CONSTRAINT `decisions_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `decisions` ADD CONSTRAINT `decisions_api_key_id_api_keys_id_fk` FOREIGN KEY (`api_key_id`) REFERENCES `api_keys`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `decisions` ADD CONSTRAINT `decisions_score_id_scores_id_fk` FOREIGN KEY (`score_id`) REFERENCES `scores`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `ledger` ADD CONSTRAINT `ledger_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `ledger` ADD CONSTRAINT `ledger_decision_id_decisions_id_fk` FOREIGN KEY (`decision_id`) REFERENCES `decisions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `note_drafts` ADD CONSTRAINT `note_drafts_case_id_cases_id_fk` FOREIGN KEY (`case_id`) REFERENCES `cases`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `note_drafts` ADD CONSTRAINT `note_drafts_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `outbox` ADD CONSTRAINT `outbox_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `summary_recipients` ADD CONSTRAINT `summary_recipients_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `outcomes` ADD CONSTRAINT `outcomes_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `api_keys` ADD CONSTRAINT `api_keys_acts_for_person_id_people_id_fk` FOREIGN KEY (`acts_for_person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `person_roles` ADD CONSTRAINT `person_roles_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `person_roles` ADD CONSTRAINT `person_roles_granted_by_people_id_fk` FOREIGN KEY (`granted_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `policies` ADD CONSTRAINT `policies_proposed_by_people_id_fk` FOREIGN KEY (`proposed_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `policies` ADD CONSTRAINT `policies_settled_by_people_id_fk` FOREIGN KEY (`settled_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `label_log` ADD CONSTRAINT `label_log_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `label_log` ADD CONSTRAINT `label_log_case_id_cases_id_fk` FOREIGN KEY (`case_id`) REFERENCES `cases`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `label_log` ADD CONSTRAINT `label_log_decision_id_decisions_id_fk` FOREIGN KEY (`decision_id`) REFERENCES `decisions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `label_log` ADD CONSTRAINT `label_log_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `scorer_snapshots` ADD CONSTRAINT `scorer_snapshots_scorer_id_scorers_id_fk` FOREIGN KEY (`scorer_id`) REFERENCES `scorers`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `signal_refreshes` ADD CONSTRAINT `signal_refreshes_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `import_chunks` ADD CONSTRAINT `import_chunks_import_id_imports_id_fk` FOREIGN KEY (`import_id`) REFERENCES `imports`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `import_errors` ADD CONSTRAINT `import_errors_import_id_imports_id_fk` FOREIGN KEY (`import_id`) REFERENCES `imports`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `imports` ADD CONSTRAINT `imports_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `labelled_entities` ADD CONSTRAINT `labelled_entities_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `scores` ADD CONSTRAINT `scores_transaction_id_transactions_id_fk` FOREIGN KEY (`transaction_id`) REFERENCES `transactions`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `case_notes_case` ON `case_notes` (`case_id`,`written_at`);--> statement-breakpoint
CREATE INDEX `cases_state_due` ON `cases` (`state`,`due_at`);--> statement-breakpoint
CREATE INDEX `cases_assigned` ON `cases` (`assigned_to`,`state`);--> statement-breakpoint
CREATE INDEX `cases_claimed` ON `cases` (`claimed_by`,`state`);--> statement-breakpoint
CREATE INDEX `cases_claim_expiry` ON `cases` (`state`,`claim_expires_at`);--> statement-breakpoint
CREATE INDEX `cases_changed` ON `cases` (`changed_at`);--> statement-breakpoint
CREATE INDEX `decisions_case` ON `decisions` (`case_id`,`decided_at`);--> statement-breakpoint
CREATE INDEX `decisions_person` ON `decisions` (`person_id`,`decided_at`);--> statement-breakpoint
CREATE INDEX `decisions_decided` ON `decisions` (`decided_at`);--> statement-breakpoint
CREATE INDEX `ledger_booked` ON `ledger` (`booked_at`);--> statement-breakpoint
CREATE INDEX `ledger_occurred` ON `ledger` (`occurred_at`);--> statement-breakpoint
CREATE INDEX `ledger_transaction` ON `ledger` (`transaction_id`);--> statement-breakpoint
CREATE INDEX `outbox_due` ON `outbox` (`state`,`next_attempt_at`);--> statement-breakpoint
CREATE INDEX `outcomes_external` ON `outcomes` (`external_id`);--> statement-breakpoint
CREATE INDEX `outcomes_transaction` ON `outcomes` (`transaction_id`);--> statement-breakpoint
CREATE INDEX `idempotency_keys_age` ON `idempotency_keys` (`created_at`);--> statement-breakpoint
CREATE INDEX `policies_state` ON `policies` (`state`,`effective_at`);--> statement-breakpoint
CREATE INDEX `label_log_transaction` ON `label_log` (`transaction_id`);--> statement-breakpoint
CREATE INDEX `label_log_place` ON `label_log` (`place`);--> statement-breakpoint
CREATE INDEX `label_log_person` ON `label_log` (`person_id`);--> statement-breakpoint
CREATE INDEX `trail_case` ON `trail` (`case_id`,`seq`);--> statement-breakpoint
CREATE INDEX `trail_actor` ON `trail` (`actor_id`,`seq`);--> statement-breakpoint
CREATE INDEX `trail_act` ON `trail` (`act`,`seq`);--> statement-breakpoint
CREATE INDEX `trail_at` ON `trail` (`at`);--> statement-breakpoint
CREATE INDEX `trail_subject` ON `trail` (`subject_kind`,`subject_id`);--> statement-breakpoint
CREATE INDEX `import_errors_import` ON `import_errors` (`import_id`,`row`);--> statement-breakpoint
CREATE INDEX `imports_state` ON `imports` (`state`,`created_at`);--> statement-breakpoint
CREATE INDEX `labelled_entities_transaction` ON `labelled_entities` (`transaction_id`);--> statement-breakpoint
CREATE INDEX `scores_transaction` ON `scores` (`transaction_id`,`kind`);--> statement-breakpoint
CREATE INDEX `scores_recent` ON `scores` (`kind`,`taken_at`,`logit`);--> statement-breakpoint
CREATE INDEX `transactions_external_any` ON `transactions` (`external_id`);--> statement-breakpoint
CREATE INDEX `transactions_account` ON `transactions` (`account_id`,`occurred_at`);--> statement-breakpoint
CREATE INDEX `transactions_counterparty` ON `transactions` (`counterparty_id`,`occurred_at`);--> statement-breakpoint
CREATE INDEX `transactions_card` ON `transactions` (`card_ref`,`occurred_at`);--> statement-breakpoint
CREATE INDEX `transactions_device` ON `transactions` (`device_id`,`occurred_at`);--> statement-breakpoint
CREATE INDEX `transactions_occurred` ON `transactions` (`occurred_at`);