ALTER TABLE `parameter` ADD `ended_by` varchar(64);--> statement-breakpoint
ALTER TABLE `parameter` ADD `ended_why` varchar(400);