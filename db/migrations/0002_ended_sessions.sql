CREATE TABLE `ended_sessions` (
	`id` uuid NOT NULL,
	`ended_at` datetime(3) NOT NULL,
	CONSTRAINT `ended_sessions_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE INDEX `ended_sessions_age` ON `ended_sessions` (`ended_at`);