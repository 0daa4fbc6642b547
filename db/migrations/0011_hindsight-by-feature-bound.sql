ALTER TABLE `hindsight_fits` DROP INDEX `hindsight_fits_place`;--> statement-breakpoint
ALTER TABLE `hindsight_fits` ADD `feature_bound` binary(8) NOT NULL;--> statement-breakpoint
ALTER TABLE `hindsight_fits` ADD CONSTRAINT `hindsight_fits_place` UNIQUE(`signal_set_version`,`weight_bound`,`feature_bound`,`offset`,`as_of_seq`);