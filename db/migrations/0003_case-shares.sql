CREATE TABLE `hand_outs` (
	`person_id` uuid NOT NULL,
	`since_overdue` int NOT NULL DEFAULT 0,
	`since_sample` int NOT NULL DEFAULT 0,
	CONSTRAINT `hand_outs_person_id` PRIMARY KEY(`person_id`)
);
--> statement-breakpoint
ALTER TABLE `cases` ADD `escalated_at` datetime(3);--> statement-breakpoint
ALTER TABLE `hand_outs` ADD CONSTRAINT `hand_outs_person_id_people_id_fk` FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `cases_lapse` ON `cases` (`state`,`lapses_at`);