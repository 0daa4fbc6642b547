ALTER TABLE `outbox` ADD `period` varchar(16);--> statement-breakpoint
ALTER TABLE `outbox` ADD `unsubscribe_hash` binary(32);--> statement-breakpoint
ALTER TABLE `summary_recipients` ADD `subscribed_at` datetime(3) NOT NULL;--> statement-breakpoint
ALTER TABLE `outcomes` ADD `source` varchar(64) NOT NULL;--> statement-breakpoint
ALTER TABLE `outcomes` ADD `recovers_base_minor` bigint;--> statement-breakpoint
ALTER TABLE `outcomes` ADD `problem` varchar(400);--> statement-breakpoint
ALTER TABLE `outbox` ADD CONSTRAINT `outbox_unsubscribe` UNIQUE(`unsubscribe_hash`);--> statement-breakpoint
CREATE INDEX `cases_opened` ON `cases` (`opened_at`);--> statement-breakpoint
CREATE INDEX `cases_decided_at` ON `cases` (`decided_at`);--> statement-breakpoint
CREATE INDEX `outbox_kind` ON `outbox` (`kind`,`created_at`);--> statement-breakpoint
ALTER TABLE `summary_recipients` DROP COLUMN `unsubscribe_hash`;