CREATE TABLE `drift_hour` (
	`node_id` int NOT NULL,
	`hour_ms` bigint NOT NULL,
	`n` smallint unsigned NOT NULL,
	`stay_from_ms` bigint,
	`temp_cc` smallint,
	`field_x_ug` mediumint NOT NULL,
	`field_y_ug` mediumint NOT NULL,
	`field_z_ug` mediumint NOT NULL,
	`offset_x_ug` mediumint NOT NULL,
	`offset_y_ug` mediumint NOT NULL,
	`offset_z_ug` mediumint NOT NULL,
	`temperature_x_ug` mediumint,
	`temperature_y_ug` mediumint,
	`temperature_z_ug` mediumint,
	`geomagnetic_x_ug` mediumint,
	`geomagnetic_y_ug` mediumint,
	`geomagnetic_z_ug` mediumint,
	`bridge_x_ug` mediumint,
	`bridge_y_ug` mediumint,
	`bridge_z_ug` mediumint,
	`film_x_ug` mediumint,
	`film_y_ug` mediumint,
	`film_z_ug` mediumint,
	`surroundings_x_ug` mediumint,
	`surroundings_y_ug` mediumint,
	`surroundings_z_ug` mediumint,
	`unexplained_x_ug` mediumint,
	`unexplained_y_ug` mediumint,
	`unexplained_z_ug` mediumint,
	`error_x_ug` mediumint,
	`error_y_ug` mediumint,
	`error_z_ug` mediumint,
	`notes` tinyint unsigned NOT NULL DEFAULT 0,
	CONSTRAINT `drift_hour_node_id_hour_ms_pk` PRIMARY KEY(`node_id`,`hour_ms`)
);
--> statement-breakpoint
CREATE TABLE `drift_line` (
	`site_id` int NOT NULL,
	`hour_ms` bigint NOT NULL,
	`verdict` enum('known','few_nodes','cause_not_known') NOT NULL,
	`h_ug` mediumint NOT NULL,
	`e_ug` mediumint NOT NULL,
	`z_ug` mediumint NOT NULL,
	`spread_ug` mediumint,
	`nodes` int NOT NULL,
	CONSTRAINT `drift_line_site_id_hour_ms_pk` PRIMARY KEY(`site_id`,`hour_ms`)
);
--> statement-breakpoint
CREATE TABLE `drift_mark` (
	`site_id` int NOT NULL,
	`hour_ms` bigint NOT NULL,
	`marked_at_ms` bigint NOT NULL,
	CONSTRAINT `drift_mark_site_id_hour_ms_pk` PRIMARY KEY(`site_id`,`hour_ms`)
);
--> statement-breakpoint
CREATE TABLE `drift_node` (
	`node_id` int NOT NULL,
	`site_id` int NOT NULL,
	`placed_at_ms` bigint NOT NULL,
	`memory` varbinary(4096) NOT NULL,
	`drifting_since_ms` bigint,
	`refresh_since_ms` bigint,
	`pair_wanted` enum('calibrate','diagnose'),
	CONSTRAINT `drift_node_node_id` PRIMARY KEY(`node_id`)
);
--> statement-breakpoint
CREATE TABLE `drift_pair` (
	`node_id` int NOT NULL,
	`boot` int unsigned NOT NULL,
	`seq` int unsigned NOT NULL,
	`at_ms` bigint NOT NULL,
	`vacant` boolean NOT NULL,
	`settled` boolean NOT NULL,
	`temp_cc` smallint,
	`field_x_ug` mediumint NOT NULL,
	`field_y_ug` mediumint NOT NULL,
	`field_z_ug` mediumint NOT NULL,
	`offset_x_ug` mediumint NOT NULL,
	`offset_y_ug` mediumint NOT NULL,
	`offset_z_ug` mediumint NOT NULL,
	`film_x_ug` mediumint,
	`film_y_ug` mediumint,
	`film_z_ug` mediumint,
	`bridge_x_ug` mediumint,
	`bridge_y_ug` mediumint,
	`bridge_z_ug` mediumint,
	`surroundings_x_ug` mediumint,
	`surroundings_y_ug` mediumint,
	`surroundings_z_ug` mediumint,
	`named` enum('bridge','film','gain_or_field','tilt','steel_or_works'),
	`named_ug` mediumint,
	CONSTRAINT `drift_pair_node_id_boot_seq_pk` PRIMARY KEY(`node_id`,`boot`,`seq`)
);
--> statement-breakpoint
CREATE TABLE `drift_site` (
	`site_id` int NOT NULL,
	`from_ms` bigint NOT NULL,
	`closed_to_ms` bigint NOT NULL,
	CONSTRAINT `drift_site_site_id` PRIMARY KEY(`site_id`)
);
--> statement-breakpoint
CREATE TABLE `drift_snapshot` (
	`site_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	`node_id` int NOT NULL,
	`placed_at_ms` bigint NOT NULL,
	`memory` varbinary(4096) NOT NULL,
	CONSTRAINT `drift_snapshot_site_id_at_ms_node_id_pk` PRIMARY KEY(`site_id`,`at_ms`,`node_id`)
);
--> statement-breakpoint
ALTER TABLE `drift_hour` ADD CONSTRAINT `drift_hour_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_line` ADD CONSTRAINT `drift_line_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_mark` ADD CONSTRAINT `drift_mark_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_node` ADD CONSTRAINT `drift_node_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_node` ADD CONSTRAINT `drift_node_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_pair` ADD CONSTRAINT `drift_pair_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_site` ADD CONSTRAINT `drift_site_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_snapshot` ADD CONSTRAINT `drift_snapshot_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `drift_snapshot` ADD CONSTRAINT `drift_snapshot_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `drift_node_site` ON `drift_node` (`site_id`);--> statement-breakpoint
CREATE INDEX `drift_pair_at` ON `drift_pair` (`node_id`,`at_ms`);