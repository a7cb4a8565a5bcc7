CREATE TABLE `visit_request` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`bay_id` int NOT NULL,
	`node_id` int,
	`reason` varchar(400) NOT NULL,
	`asked_by` int NOT NULL,
	`asked_at_ms` bigint NOT NULL,
	`taken_by` int,
	`taken_at_ms` bigint,
	`ended_by` int,
	`ended_at_ms` bigint,
	`outcome` varchar(400),
	CONSTRAINT `visit_request_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `visit_request` ADD CONSTRAINT `visit_request_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_request` ADD CONSTRAINT `visit_request_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_request` ADD CONSTRAINT `visit_request_asked_by_person_id_fk` FOREIGN KEY (`asked_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_request` ADD CONSTRAINT `visit_request_taken_by_person_id_fk` FOREIGN KEY (`taken_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_request` ADD CONSTRAINT `visit_request_ended_by_person_id_fk` FOREIGN KEY (`ended_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `visit_request_site` ON `visit_request` (`site_id`,`ended_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_request_bay` ON `visit_request` (`bay_id`);