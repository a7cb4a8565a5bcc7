CREATE TABLE `refresh` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`node_id` int NOT NULL,
	`bay_id` int NOT NULL,
	`bulk_id` int,
	`origin` enum('person','key','schedule','pair_rule') NOT NULL,
	`state` enum('asked','approved','waiting','sent','obeyed','measured','proved','not_cured','refused','expired','called_off') NOT NULL,
	`open_node_id` int,
	`reason` varchar(400) NOT NULL,
	`evidence` text NOT NULL,
	`asked_by` varchar(64) NOT NULL,
	`asked_at_ms` bigint NOT NULL,
	`approved_by` varchar(64),
	`approved_at_ms` bigint,
	`any_hour` boolean NOT NULL DEFAULT false,
	`waits_for` varchar(32),
	`waits_since_ms` bigint,
	`command_id` binary(8),
	`boot` int unsigned,
	`attempts` smallint NOT NULL DEFAULT 0,
	`sent_at_ms` bigint,
	`obeyed_at_ms` bigint,
	`pulse_at_ms` bigint,
	`measure_from_ms` bigint,
	`disturbed` boolean NOT NULL DEFAULT false,
	`still_readings` int NOT NULL DEFAULT 0,
	`proof` text,
	`verdict` varchar(400),
	`visit_wanted` boolean NOT NULL DEFAULT false,
	`ended_at_ms` bigint,
	`revision` int NOT NULL DEFAULT 0,
	CONSTRAINT `refresh_id` PRIMARY KEY(`id`),
	CONSTRAINT `refresh_open_node` UNIQUE(`open_node_id`)
);
--> statement-breakpoint
CREATE TABLE `refresh_bulk` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`what` varchar(120) NOT NULL,
	`reason` varchar(400) NOT NULL,
	`state` enum('running','paused','called_off','done') NOT NULL DEFAULT 'running',
	`left_out` text NOT NULL,
	`asked_by` varchar(64) NOT NULL,
	`asked_at_ms` bigint NOT NULL,
	`ended_at_ms` bigint,
	CONSTRAINT `refresh_bulk_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `refresh_settings` (
	`site_id` int NOT NULL,
	`own_approval` boolean NOT NULL,
	`most_at_once` smallint NOT NULL,
	`hold_off_h` smallint NOT NULL,
	`schedule_on` boolean NOT NULL,
	`schedule_reasons` varchar(200) NOT NULL,
	`most_a_night` smallint NOT NULL,
	`changed_by` varchar(64) NOT NULL,
	`changed_at_ms` bigint NOT NULL,
	CONSTRAINT `refresh_settings_site_id` PRIMARY KEY(`site_id`)
);
--> statement-breakpoint
CREATE TABLE `refresh_transition` (
	`id` int AUTO_INCREMENT NOT NULL,
	`refresh_id` int NOT NULL,
	`site_id` int NOT NULL,
	`node_id` int NOT NULL,
	`from_state` enum('asked','approved','waiting','sent','obeyed','measured','proved','not_cured','refused','expired','called_off'),
	`to_state` enum('asked','approved','waiting','sent','obeyed','measured','proved','not_cured','refused','expired','called_off') NOT NULL,
	`by_actor` varchar(64) NOT NULL,
	`why` varchar(400) NOT NULL,
	`at_ms` bigint NOT NULL,
	`told_at_ms` bigint,
	CONSTRAINT `refresh_transition_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `visit_request` MODIFY COLUMN `asked_by` int;--> statement-breakpoint
ALTER TABLE `refresh` ADD CONSTRAINT `refresh_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh` ADD CONSTRAINT `refresh_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh` ADD CONSTRAINT `refresh_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh` ADD CONSTRAINT `refresh_bulk_id_refresh_bulk_id_fk` FOREIGN KEY (`bulk_id`) REFERENCES `refresh_bulk`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh_bulk` ADD CONSTRAINT `refresh_bulk_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh_settings` ADD CONSTRAINT `refresh_settings_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `refresh_transition` ADD CONSTRAINT `refresh_transition_refresh_id_refresh_id_fk` FOREIGN KEY (`refresh_id`) REFERENCES `refresh`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `refresh_site_asked` ON `refresh` (`site_id`,`asked_at_ms`);--> statement-breakpoint
CREATE INDEX `refresh_node` ON `refresh` (`node_id`,`asked_at_ms`);--> statement-breakpoint
CREATE INDEX `refresh_ended` ON `refresh` (`ended_at_ms`);--> statement-breakpoint
CREATE INDEX `refresh_bulk_id` ON `refresh` (`bulk_id`);--> statement-breakpoint
CREATE INDEX `refresh_bulk_site` ON `refresh_bulk` (`site_id`,`asked_at_ms`);--> statement-breakpoint
CREATE INDEX `refresh_transition_refresh` ON `refresh_transition` (`refresh_id`,`id`);--> statement-breakpoint
CREATE INDEX `refresh_transition_told` ON `refresh_transition` (`told_at_ms`,`id`);