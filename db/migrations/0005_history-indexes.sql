CREATE TABLE `arrival_days` (
	`day` date NOT NULL,
	`received` int NOT NULL,
	`passed` int NOT NULL,
	CONSTRAINT `arrival_days_day` PRIMARY KEY(`day`)
);
--> statement-breakpoint
DROP INDEX `transactions_account` ON `transactions`;--> statement-breakpoint
DROP INDEX `transactions_counterparty` ON `transactions`;--> statement-breakpoint
DROP INDEX `transactions_card` ON `transactions`;--> statement-breakpoint
DROP INDEX `transactions_device` ON `transactions`;--> statement-breakpoint
CREATE INDEX `transactions_account` ON `transactions` (`account_id`,`occurred_at`,`amount_base_minor`,`counterparty_id`,`device_id`,`counterparty_country`,`direction`);--> statement-breakpoint
CREATE INDEX `transactions_counterparty` ON `transactions` (`counterparty_id`,`occurred_at`,`amount_base_minor`,`account_id`);--> statement-breakpoint
CREATE INDEX `transactions_card` ON `transactions` (`card_ref`,`occurred_at`,`amount_base_minor`,`account_id`);--> statement-breakpoint
CREATE INDEX `transactions_device` ON `transactions` (`device_id`,`occurred_at`,`amount_base_minor`,`account_id`);