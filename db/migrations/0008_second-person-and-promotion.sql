ALTER TABLE `approvals` ADD `waiting_for` char(32) GENERATED ALWAYS AS ((if(state = 'waiting', md5(concat(cast(kind as binary), cast(subject as binary))), null))) STORED;--> statement-breakpoint
ALTER TABLE `scorers` ADD `carried_loss` binary(8);--> statement-breakpoint
ALTER TABLE `approvals` ADD CONSTRAINT `approvals_waiting_for` UNIQUE(`waiting_for`);--> statement-breakpoint
CREATE INDEX `label_log_at` ON `label_log` (`at`);