CREATE TABLE `mail_setting` (
	`person_id` int NOT NULL,
	`paces` text NOT NULL,
	`sites` text,
	`quiet_from_min` smallint NOT NULL,
	`quiet_to_min` smallint NOT NULL,
	`quiet_weekends` boolean NOT NULL,
	`daily_at_min` smallint NOT NULL,
	`deputy_id` int,
	`off_at_ms` bigint,
	CONSTRAINT `mail_setting_person_id` PRIMARY KEY(`person_id`)
);
--> statement-breakpoint
CREATE TABLE `mail_wish` (
	`id` int AUTO_INCREMENT NOT NULL,
	`person_id` int NOT NULL,
	`site_id` int,
	`notice_id` int NOT NULL,
	`what` enum('opened','worse','escalated','taken','closed') NOT NULL,
	`detail` varchar(600) NOT NULL DEFAULT '',
	`wished_at_ms` bigint NOT NULL,
	`due_ms` bigint NOT NULL,
	`done_at_ms` bigint,
	`message_id` varchar(120),
	CONSTRAINT `mail_wish_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `notice` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int,
	`node_id` int,
	`bay_id` int,
	`subject` varchar(160),
	`about` varchar(160) NOT NULL,
	`kind` enum('site_late','mail_failing','silent','inverted','clipped','refresh_not_cured','refresh_due','drifting','reference_vehicle','low_cell','rejected_frames','clock_off') NOT NULL,
	`kinds` varchar(200) NOT NULL,
	`awaits_proof` boolean NOT NULL DEFAULT false,
	`since_ms` bigint NOT NULL,
	`opened_at_ms` bigint NOT NULL,
	`deadline_ms` bigint NOT NULL,
	`stage` smallint NOT NULL DEFAULT 0,
	`facts` text NOT NULL,
	`taken_by` int,
	`taken_at_ms` bigint,
	`snoozed_until_ms` bigint,
	`closed_at_ms` bigint,
	`closed_how` enum('healed','proved','visit','removed','folded'),
	CONSTRAINT `notice_id` PRIMARY KEY(`id`),
	CONSTRAINT `notice_subject_unique` UNIQUE(`subject`)
);
--> statement-breakpoint
CREATE TABLE `notice_cursor` (
	`site_id` int NOT NULL,
	`change_id` bigint NOT NULL,
	`looked_at_ms` bigint NOT NULL,
	CONSTRAINT `notice_cursor_site_id` PRIMARY KEY(`site_id`)
);
--> statement-breakpoint
CREATE TABLE `notice_entry` (
	`id` int AUTO_INCREMENT NOT NULL,
	`notice_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	`what` enum('opened','kind','told','taken','handed','given_back','snoozed','comment','escalated','awaits_proof','closed') NOT NULL,
	`person_id` int,
	`detail` varchar(600) NOT NULL DEFAULT '',
	CONSTRAINT `notice_entry_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `notice_look` (
	`person_id` int NOT NULL,
	`site_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	CONSTRAINT `notice_look_person_id_site_id_pk` PRIMARY KEY(`person_id`,`site_id`)
);
--> statement-breakpoint
ALTER TABLE `outbox` ADD `last_code` smallint;--> statement-breakpoint
ALTER TABLE `outbox` ADD `person_id` int;--> statement-breakpoint
ALTER TABLE `outbox` ADD `message_id` varchar(120);--> statement-breakpoint
ALTER TABLE `outbox` ADD `about` varchar(200) DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE `mail_setting` ADD CONSTRAINT `mail_setting_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `mail_setting` ADD CONSTRAINT `mail_setting_deputy_id_person_id_fk` FOREIGN KEY (`deputy_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `mail_wish` ADD CONSTRAINT `mail_wish_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `mail_wish` ADD CONSTRAINT `mail_wish_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `mail_wish` ADD CONSTRAINT `mail_wish_notice_id_notice_id_fk` FOREIGN KEY (`notice_id`) REFERENCES `notice`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice` ADD CONSTRAINT `notice_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice` ADD CONSTRAINT `notice_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice` ADD CONSTRAINT `notice_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice` ADD CONSTRAINT `notice_taken_by_person_id_fk` FOREIGN KEY (`taken_by`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice_cursor` ADD CONSTRAINT `notice_cursor_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice_entry` ADD CONSTRAINT `notice_entry_notice_id_notice_id_fk` FOREIGN KEY (`notice_id`) REFERENCES `notice`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice_entry` ADD CONSTRAINT `notice_entry_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `notice_look` ADD CONSTRAINT `notice_look_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `mail_wish_due` ON `mail_wish` (`done_at_ms`,`due_ms`);--> statement-breakpoint
CREATE INDEX `mail_wish_told` ON `mail_wish` (`person_id`,`site_id`,`done_at_ms`);--> statement-breakpoint
CREATE INDEX `mail_wish_notice` ON `mail_wish` (`notice_id`,`person_id`);--> statement-breakpoint
CREATE INDEX `notice_site` ON `notice` (`site_id`,`closed_at_ms`);--> statement-breakpoint
CREATE INDEX `notice_about` ON `notice` (`about`,`closed_at_ms`);--> statement-breakpoint
CREATE INDEX `notice_due` ON `notice` (`closed_at_ms`,`deadline_ms`);--> statement-breakpoint
CREATE INDEX `notice_entry_of` ON `notice_entry` (`notice_id`,`id`);--> statement-breakpoint
CREATE INDEX `outbox_person` ON `outbox` (`person_id`,`created_at_ms`);