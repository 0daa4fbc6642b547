CREATE TRIGGER `trail_no_update` BEFORE UPDATE ON `trail` FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'trail entries are never changed';
--> statement-breakpoint
CREATE TRIGGER `trail_no_delete` BEFORE DELETE ON `trail` FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'trail entries are never deleted';
--> statement-breakpoint
CREATE TRIGGER `label_log_no_update` BEFORE UPDATE ON `label_log` FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'label log rows are never changed';
--> statement-breakpoint
CREATE TRIGGER `label_log_no_delete` BEFORE DELETE ON `label_log` FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'label log rows are never deleted';
--> statement-breakpoint
CREATE TRIGGER `scores_no_update` BEFORE UPDATE ON `scores` FOR EACH ROW SIGNAL SQLSTATE '45000' SET MESSAGE_TEXT = 'scores are never changed';
--> statement-breakpoint
INSERT INTO `trail_head` (`id`, `seq`, `hash`) VALUES (1, 0, REPEAT(CHAR(0), 32));
