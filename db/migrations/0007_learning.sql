CREATE TABLE `approvals` (
	`id` uuid NOT NULL,
	`kind` enum('scorer.promote','signal.switch_on','signal.switch_off','labels.remove') NOT NULL,
	`subject` json NOT NULL,
	`state` enum('waiting','approved','refused','withdrawn') NOT NULL,
	`reason` text NOT NULL,
	`proposed_by` uuid NOT NULL,
	`proposed_at` datetime(3) NOT NULL,
	`settled_by` uuid,
	`settled_at` datetime(3),
	`revision` int NOT NULL DEFAULT 1,
	CONSTRAINT `approvals_id` PRIMARY KEY(`id`),
	CONSTRAINT `approvals_settled` CHECK((`approvals`.`state` = 'waiting') = (`approvals`.`settled_at` is null)),
	CONSTRAINT `approvals_second_person` CHECK(`approvals`.`state` = 'waiting' or (`approvals`.`settled_by` = `approvals`.`proposed_by`) = (`approvals`.`state` = 'withdrawn'))
);
--> statement-breakpoint
CREATE TABLE `candidate_losses` (
	`scorer_id` uuid NOT NULL,
	`seq` bigint NOT NULL,
	`probability` binary(8) NOT NULL,
	`loss` binary(8) NOT NULL,
	CONSTRAINT `candidate_losses_scorer_id_seq_pk` PRIMARY KEY(`scorer_id`,`seq`)
);
--> statement-breakpoint
CREATE TABLE `drift_warnings` (
	`id` uuid NOT NULL,
	`kind` enum('loss','calibration') NOT NULL,
	`scorer_id` uuid NOT NULL,
	`seq` bigint NOT NULL,
	`raised_at` datetime(3) NOT NULL,
	`statistic` binary(8) NOT NULL,
	`line` binary(8) NOT NULL,
	`detail` json NOT NULL,
	`seen_by` uuid,
	`seen_at` datetime(3),
	CONSTRAINT `drift_warnings_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `hindsight_fits` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`signal_set_version` int NOT NULL,
	`weight_bound` binary(8) NOT NULL,
	`offset` binary(8) NOT NULL,
	`as_of_seq` bigint NOT NULL,
	`labels` int NOT NULL,
	`loss` binary(8) NOT NULL,
	`weights` longblob NOT NULL,
	`computed_at` datetime(3) NOT NULL,
	CONSTRAINT `hindsight_fits_id` PRIMARY KEY(`id`),
	CONSTRAINT `hindsight_fits_place` UNIQUE(`signal_set_version`,`weight_bound`,`offset`,`as_of_seq`)
);
--> statement-breakpoint
CREATE TABLE `own_signals` (
	`id` uuid NOT NULL,
	`key` varchar(48) NOT NULL,
	`name` varchar(80) NOT NULL,
	`sentence` text NOT NULL,
	`formula` text NOT NULL,
	`middle` binary(8) NOT NULL,
	`reach` binary(8) NOT NULL,
	`state` enum('draft','on','off') NOT NULL,
	`position` int,
	`created_by` uuid NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`changed_at` datetime(3) NOT NULL,
	`revision` int NOT NULL DEFAULT 1,
	`is_archived` tinyint NOT NULL DEFAULT 0,
	CONSTRAINT `own_signals_id` PRIMARY KEY(`id`),
	CONSTRAINT `own_signals_key_unique` UNIQUE(`key`),
	CONSTRAINT `own_signals_position_unique` UNIQUE(`position`),
	CONSTRAINT `own_signals_position` CHECK(`own_signals`.`state` = 'draft' or `own_signals`.`position` is not null)
);
--> statement-breakpoint
ALTER TABLE `label_log` MODIFY COLUMN `kind` enum('decision','undo','second_review','adjudication','outcome','correction','removal','matured') NOT NULL;--> statement-breakpoint
ALTER TABLE `scorers` MODIFY COLUMN `role` enum('in_use','candidate','retired','dropped') NOT NULL;--> statement-breakpoint
ALTER TABLE `scorers` ADD `started_seq` bigint DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE `scorers` ADD `created_at` datetime(3);--> statement-breakpoint
ALTER TABLE `scorers` ADD `created_by` uuid;--> statement-breakpoint
ALTER TABLE `approvals` ADD CONSTRAINT `approvals_proposed_by_people_id_fk` FOREIGN KEY (`proposed_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `approvals` ADD CONSTRAINT `approvals_settled_by_people_id_fk` FOREIGN KEY (`settled_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `candidate_losses` ADD CONSTRAINT `candidate_losses_scorer_id_scorers_id_fk` FOREIGN KEY (`scorer_id`) REFERENCES `scorers`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `candidate_losses` ADD CONSTRAINT `candidate_losses_seq_label_log_seq_fk` FOREIGN KEY (`seq`) REFERENCES `label_log`(`seq`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_warnings` ADD CONSTRAINT `drift_warnings_scorer_id_scorers_id_fk` FOREIGN KEY (`scorer_id`) REFERENCES `scorers`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_warnings` ADD CONSTRAINT `drift_warnings_seen_by_people_id_fk` FOREIGN KEY (`seen_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `own_signals` ADD CONSTRAINT `own_signals_created_by_people_id_fk` FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `approvals_state` ON `approvals` (`state`,`proposed_at`);--> statement-breakpoint
ALTER TABLE `scorers` ADD CONSTRAINT `scorers_created_by_people_id_fk` FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;