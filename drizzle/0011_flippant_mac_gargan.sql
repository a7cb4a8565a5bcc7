CREATE TABLE `site_access` (
	`site_id` int NOT NULL,
	`parking` varchar(1000) NOT NULL DEFAULT '',
	`way_in` varchar(1000) NOT NULL DEFAULT '',
	`keys_at` varchar(1000) NOT NULL DEFAULT '',
	`contact` varchar(1000) NOT NULL DEFAULT '',
	`version` int NOT NULL DEFAULT 1,
	`changed_at_ms` bigint NOT NULL,
	CONSTRAINT `site_access_site_id` PRIMARY KEY(`site_id`)
);
--> statement-breakpoint
CREATE TABLE `site_permit` (
	`site_id` int NOT NULL,
	`place` smallint NOT NULL,
	`name` varchar(120) NOT NULL,
	`number` varchar(64) NOT NULL DEFAULT '',
	`last_day` varchar(10),
	CONSTRAINT `site_permit_site_id_place_pk` PRIMARY KEY(`site_id`,`place`)
);
--> statement-breakpoint
CREATE TABLE `visit` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`taken_by` int,
	`taken_at_ms` bigint NOT NULL,
	`ended_at_ms` bigint,
	CONSTRAINT `visit_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `visit_cause` (
	`id` int AUTO_INCREMENT NOT NULL,
	`request_id` int NOT NULL,
	`cause` enum('not_cured','silent','clipped','low_cell','swap','by_hand') NOT NULL,
	`detail` varchar(400) NOT NULL DEFAULT '',
	`at_ms` bigint NOT NULL,
	`ended_at_ms` bigint,
	CONSTRAINT `visit_cause_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `visit_photo` (
	`id` varchar(36) NOT NULL,
	`stop_id` int NOT NULL,
	`person_id` int,
	`file` varchar(32),
	`sent_sha256` varchar(64) NOT NULL,
	`width_px` smallint NOT NULL,
	`height_px` smallint NOT NULL,
	`size_bytes` int NOT NULL,
	`made_at_ms` bigint NOT NULL,
	`taken_at_ms` bigint NOT NULL,
	`added` boolean NOT NULL DEFAULT false,
	CONSTRAINT `visit_photo_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `visit_recording` (
	`id` varchar(36) NOT NULL,
	`stop_id` int NOT NULL,
	`person_id` int,
	`kind` enum('tick','part','outcome','note') NOT NULL,
	`code` varchar(32) NOT NULL DEFAULT '',
	`amount` int NOT NULL DEFAULT 0,
	`text` varchar(1000) NOT NULL DEFAULT '',
	`made_at_ms` bigint NOT NULL,
	`taken_at_ms` bigint NOT NULL,
	`added` boolean NOT NULL DEFAULT false,
	CONSTRAINT `visit_recording_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `visit_stop` (
	`id` int AUTO_INCREMENT NOT NULL,
	`visit_id` int NOT NULL,
	`request_id` int NOT NULL,
	`place` smallint NOT NULL,
	`outcome` enum('cured','cell_changed','node_swapped','obstacle_removed','to_be_swapped','nothing_found','not_reached','other'),
	`note` varchar(1000) NOT NULL DEFAULT '',
	`ended_by` int,
	`ended_at_ms` bigint,
	`recorded_at_ms` bigint,
	CONSTRAINT `visit_stop_id` PRIMARY KEY(`id`),
	CONSTRAINT `visit_stop_once` UNIQUE(`visit_id`,`request_id`)
);
--> statement-breakpoint
ALTER TABLE `site_access` ADD CONSTRAINT `site_access_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `site_permit` ADD CONSTRAINT `site_permit_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit` ADD CONSTRAINT `visit_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit` ADD CONSTRAINT `visit_taken_by_person_id_fk` FOREIGN KEY (`taken_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_cause` ADD CONSTRAINT `visit_cause_request_id_visit_request_id_fk` FOREIGN KEY (`request_id`) REFERENCES `visit_request`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_photo` ADD CONSTRAINT `visit_photo_stop_id_visit_stop_id_fk` FOREIGN KEY (`stop_id`) REFERENCES `visit_stop`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_photo` ADD CONSTRAINT `visit_photo_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_recording` ADD CONSTRAINT `visit_recording_stop_id_visit_stop_id_fk` FOREIGN KEY (`stop_id`) REFERENCES `visit_stop`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_recording` ADD CONSTRAINT `visit_recording_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_stop` ADD CONSTRAINT `visit_stop_visit_id_visit_id_fk` FOREIGN KEY (`visit_id`) REFERENCES `visit`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_stop` ADD CONSTRAINT `visit_stop_request_id_visit_request_id_fk` FOREIGN KEY (`request_id`) REFERENCES `visit_request`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit_stop` ADD CONSTRAINT `visit_stop_ended_by_person_id_fk` FOREIGN KEY (`ended_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `visit_site` ON `visit` (`site_id`,`ended_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_person` ON `visit` (`taken_by`,`ended_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_cause_of` ON `visit_cause` (`request_id`,`cause`);--> statement-breakpoint
CREATE INDEX `visit_photo_stop` ON `visit_photo` (`stop_id`,`made_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_photo_file` ON `visit_photo` (`file`);--> statement-breakpoint
CREATE INDEX `visit_photo_taken` ON `visit_photo` (`taken_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_recording_stop` ON `visit_recording` (`stop_id`,`made_at_ms`);--> statement-breakpoint
CREATE INDEX `visit_stop_request` ON `visit_stop` (`request_id`);