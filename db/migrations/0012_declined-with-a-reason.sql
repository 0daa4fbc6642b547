ALTER TABLE `policies` ADD `refusal_reason` text;--> statement-breakpoint
ALTER TABLE `idempotency_keys` DROP COLUMN `status`;