CREATE TABLE `influence_runs` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`scorer_id` uuid NOT NULL,
	`as_of_seq` bigint NOT NULL,
	`state` enum('running','done','failed') NOT NULL,
	`is_running` tinyint GENERATED ALWAYS AS ((if(state = 'running', 1, null))) STORED,
	`started_at` datetime(3) NOT NULL,
	`lease_expires_at` datetime(3) NOT NULL,
	`finished_at` datetime(3),
	`result` json,
	CONSTRAINT `influence_runs_id` PRIMARY KEY(`id`),
	CONSTRAINT `influence_runs_running` UNIQUE(`is_running`)
);
--> statement-breakpoint
ALTER TABLE `influence_runs` ADD CONSTRAINT `influence_runs_scorer_id_scorers_id_fk` FOREIGN KEY (`scorer_id`) REFERENCES `scorers`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `influence_runs_newest` ON `influence_runs` (`state`,`scorer_id`,`as_of_seq`);