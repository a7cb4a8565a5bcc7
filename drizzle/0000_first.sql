CREATE TABLE `act` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`node_id` int,
	`bay_id` int,
	`kind` enum('place','accept','withdraw','settle','undo_settle','close','lift','parameters','accept_boot','ask') NOT NULL,
	`at_ms` bigint NOT NULL,
	`args` text NOT NULL,
	`by_actor` varchar(64) NOT NULL,
	`why` varchar(400),
	`recorded_at_ms` bigint NOT NULL,
	`taken_at_ms` bigint,
	`outcome` varchar(200),
	CONSTRAINT `act_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `parameter` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`node_id` int,
	`name` varchar(64) NOT NULL,
	`value` varchar(64) NOT NULL,
	`from_ms` bigint NOT NULL,
	`until_ms` bigint,
	`by_actor` varchar(64) NOT NULL,
	`why` varchar(400) NOT NULL,
	CONSTRAINT `parameter_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `bay` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`zone_id` int NOT NULL,
	`code` varchar(32) NOT NULL,
	`geometry` mediumtext,
	`personal` boolean NOT NULL DEFAULT false,
	`created_at_ms` bigint NOT NULL,
	`removed_at_ms` bigint NOT NULL DEFAULT 0,
	CONSTRAINT `bay_id` PRIMARY KEY(`id`),
	CONSTRAINT `bay_site_code` UNIQUE(`site_id`,`code`,`removed_at_ms`)
);
--> statement-breakpoint
CREATE TABLE `bay_state` (
	`bay_id` int NOT NULL,
	`site_id` int NOT NULL,
	`node_id` int,
	`state` enum('vacant','occupied','unknown') NOT NULL DEFAULT 'unknown',
	`since_ms` bigint,
	`confidence_20` tinyint,
	`doubt_reason` varchar(64),
	`doubt_since_ms` bigint,
	`condition` enum('withdrawn','unplaced','learning','silent','inverted','clipped','refresh_due','drifting','in_service') NOT NULL DEFAULT 'unplaced',
	`also` varchar(200) NOT NULL DEFAULT '',
	`last_known_state` enum('vacant','occupied','unknown'),
	`last_known_at_ms` bigint,
	`evidence` text,
	`change_id` bigint NOT NULL DEFAULT 0,
	CONSTRAINT `bay_state_bay_id` PRIMARY KEY(`bay_id`)
);
--> statement-breakpoint
CREATE TABLE `closure` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`bay_id` int NOT NULL,
	`from_ms` bigint NOT NULL,
	`to_ms` bigint NOT NULL,
	`reason` varchar(400) NOT NULL,
	`act_id` int NOT NULL,
	`lifted_at_ms` bigint,
	`end_finding` varchar(64),
	`stage` smallint NOT NULL DEFAULT 0,
	CONSTRAINT `closure_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `history` (
	`id` bigint AUTO_INCREMENT NOT NULL,
	`bay_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	`type` enum('arrival','departure','unknown','known','settled') NOT NULL,
	`state` enum('vacant','occupied','unknown') NOT NULL,
	`confidence_20` tinyint,
	`uncertainty_s` int NOT NULL,
	`evidence` text,
	`decided_at_ms` bigint NOT NULL,
	`voided_at_ms` bigint,
	`event_id` bigint,
	CONSTRAINT `history_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `change` (
	`site_id` int NOT NULL,
	`id` bigint NOT NULL,
	`kind` enum('event','bay','condition','geometry','closure','removed','site') NOT NULL,
	`bay_id` int,
	`node_id` int,
	`recorded_at_ms` bigint NOT NULL,
	CONSTRAINT `change_site_id_id_pk` PRIMARY KEY(`site_id`,`id`)
);
--> statement-breakpoint
CREATE TABLE `event` (
	`site_id` int NOT NULL,
	`id` bigint NOT NULL,
	`bay_id` int NOT NULL,
	`type` enum('arrival','departure','unknown','known','settled','voided') NOT NULL,
	`state` enum('vacant','occupied','unknown') NOT NULL,
	`at_ms` bigint NOT NULL,
	`recorded_at_ms` bigint NOT NULL,
	`confidence_20` tinyint,
	`uncertainty_s` int NOT NULL,
	`late` boolean NOT NULL DEFAULT false,
	`voids` bigint,
	`evidence` text,
	CONSTRAINT `event_site_id_id_pk` PRIMARY KEY(`site_id`,`id`)
);
--> statement-breakpoint
CREATE TABLE `boot` (
	`node_id` int NOT NULL,
	`boot` int unsigned NOT NULL,
	`at_ms` bigint NOT NULL,
	`firmware` varchar(64),
	`profile_code` varchar(32),
	`cause` varchar(64),
	CONSTRAINT `boot_node_id_boot_pk` PRIMARY KEY(`node_id`,`boot`)
);
--> statement-breakpoint
CREATE TABLE `command` (
	`id` binary(8) NOT NULL,
	`node_id` int NOT NULL,
	`verb` enum('set','reset','pair','report') NOT NULL,
	`period_s` int,
	`delta_mg` int,
	`boot` int unsigned NOT NULL,
	`cause` varchar(64) NOT NULL,
	`by_actor` varchar(64) NOT NULL,
	`created_at_ms` bigint NOT NULL,
	`expires_at_ms` bigint NOT NULL,
	`sent_at_ms` bigint,
	`sends` smallint NOT NULL DEFAULT 0,
	`answered_at_ms` bigint,
	`outcome` tinyint,
	`reason` varchar(200),
	CONSTRAINT `command_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `node` (
	`id` int AUTO_INCREMENT NOT NULL,
	`serial` varchar(32) NOT NULL,
	`site_id` int NOT NULL,
	`bay_id` int,
	`profile_code` varchar(32) NOT NULL,
	`gateway` varchar(64),
	`key_sealed` varbinary(96),
	`key_prev_sealed` varbinary(96),
	`key_prev_until_ms` bigint,
	`mqtt_hash` binary(32) NOT NULL,
	`mqtt_hash_prev` binary(32),
	`pre_commissioned` boolean NOT NULL DEFAULT false,
	`unsigned_allowed` boolean NOT NULL DEFAULT false,
	`heading_deg` double,
	`east_m` double,
	`north_m` double,
	`firmware` varchar(64),
	`boot_cause` varchar(64),
	`period_s` int NOT NULL DEFAULT 60,
	`delta_mg` int NOT NULL DEFAULT 8,
	`created_at_ms` bigint NOT NULL,
	`placed_at_ms` bigint,
	`withdrawn_at_ms` bigint,
	CONSTRAINT `node_id` PRIMARY KEY(`id`),
	CONSTRAINT `node_serial_unique` UNIQUE(`serial`)
);
--> statement-breakpoint
CREATE TABLE `node_count` (
	`node_id` int NOT NULL,
	`day_ms` bigint NOT NULL,
	`messages` int NOT NULL DEFAULT 0,
	`duplicates` int NOT NULL DEFAULT 0,
	`rejected` int NOT NULL DEFAULT 0,
	`tx_frames` int NOT NULL DEFAULT 0,
	`tx_radio_ms` int NOT NULL DEFAULT 0,
	`pulses` int NOT NULL DEFAULT 0,
	`battery_min_mv` smallint unsigned,
	`temp_mean_c` float,
	CONSTRAINT `node_count_node_id_day_ms_pk` PRIMARY KEY(`node_id`,`day_ms`)
);
--> statement-breakpoint
CREATE TABLE `node_fast` (
	`node_id` int NOT NULL,
	`heard_at_ms` bigint NOT NULL,
	`state` varbinary(300) NOT NULL,
	CONSTRAINT `node_fast_node_id` PRIMARY KEY(`node_id`)
);
--> statement-breakpoint
CREATE TABLE `node_slow` (
	`node_id` int NOT NULL,
	`state` varbinary(4096) NOT NULL,
	CONSTRAINT `node_slow_node_id` PRIMARY KEY(`node_id`)
);
--> statement-breakpoint
CREATE TABLE `node_snapshot` (
	`node_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	`fast` varbinary(300) NOT NULL,
	`slow` varbinary(4096),
	CONSTRAINT `node_snapshot_node_id_at_ms_pk` PRIMARY KEY(`node_id`,`at_ms`)
);
--> statement-breakpoint
CREATE TABLE `profile` (
	`code` varchar(32) NOT NULL,
	`body` text NOT NULL,
	`built_in` boolean NOT NULL DEFAULT false,
	`changed_at_ms` bigint NOT NULL,
	CONSTRAINT `profile_code` PRIMARY KEY(`code`)
);
--> statement-breakpoint
CREATE TABLE `pulse` (
	`node_id` int NOT NULL,
	`boot` int unsigned NOT NULL,
	`seq` int unsigned NOT NULL,
	`at_ms` bigint NOT NULL,
	`source` enum('pair','ack','hello') NOT NULL,
	`set_x` mediumint,
	`set_y` mediumint,
	`set_z` mediumint,
	`reset_x` mediumint,
	`reset_y` mediumint,
	`reset_z` mediumint,
	`before_p` tinyint,
	`before_x` mediumint,
	`before_y` mediumint,
	`before_z` mediumint,
	`after_x` mediumint,
	`after_y` mediumint,
	`after_z` mediumint,
	`temp_dc` smallint,
	`battery_mv` smallint unsigned,
	`command_id` binary(8),
	`accepted` boolean,
	`refusal` varchar(120),
	CONSTRAINT `pulse_node_id_boot_seq_pk` PRIMARY KEY(`node_id`,`boot`,`seq`)
);
--> statement-breakpoint
CREATE TABLE `reading` (
	`node_id` int NOT NULL,
	`at_ms` bigint NOT NULL,
	`boot` int unsigned NOT NULL,
	`seq` int unsigned NOT NULL,
	`row` tinyint unsigned NOT NULL,
	`x` mediumint NOT NULL,
	`y` mediumint NOT NULL,
	`z` mediumint NOT NULL,
	`polarity` tinyint NOT NULL,
	`temp_dc` smallint,
	`battery_mv` smallint unsigned,
	`rssi_dbm` smallint,
	`flags` tinyint unsigned NOT NULL DEFAULT 0,
	CONSTRAINT `reading_node_id_at_ms_boot_seq_row_pk` PRIMARY KEY(`node_id`,`at_ms`,`boot`,`seq`,`row`)
)
PARTITION BY RANGE (`at_ms`) (PARTITION `p20191231` VALUES LESS THAN (1577836800000));
--> statement-breakpoint
CREATE TABLE `reading_hour` (
	`node_id` int NOT NULL,
	`hour_ms` bigint NOT NULL,
	`n` int NOT NULL,
	`x_sum` double NOT NULL,
	`y_sum` double NOT NULL,
	`z_sum` double NOT NULL,
	`x_min` mediumint NOT NULL,
	`y_min` mediumint NOT NULL,
	`z_min` mediumint NOT NULL,
	`x_max` mediumint NOT NULL,
	`y_max` mediumint NOT NULL,
	`z_max` mediumint NOT NULL,
	`temp_sum_dc` int NOT NULL DEFAULT 0,
	`temp_n` int NOT NULL DEFAULT 0,
	`battery_min_mv` smallint unsigned,
	CONSTRAINT `reading_hour_node_id_hour_ms_pk` PRIMARY KEY(`node_id`,`hour_ms`)
);
--> statement-breakpoint
CREATE TABLE `received` (
	`node_id` int NOT NULL,
	`boot` bigint NOT NULL,
	`block` int unsigned NOT NULL,
	`bits` bigint unsigned NOT NULL,
	CONSTRAINT `received_node_id_boot_block_pk` PRIMARY KEY(`node_id`,`boot`,`block`)
);
--> statement-breakpoint
CREATE TABLE `reference` (
	`id` int AUTO_INCREMENT NOT NULL,
	`node_id` int NOT NULL,
	`bay_id` int NOT NULL,
	`learned_at_ms` bigint NOT NULL,
	`x_mg` double NOT NULL,
	`y_mg` double NOT NULL,
	`z_mg` double NOT NULL,
	`sigma_mg` double NOT NULL,
	`temp_c` double,
	`offset_x_mg` double,
	`offset_y_mg` double,
	`offset_z_mg` double,
	`readings` int NOT NULL,
	`accepted_at_ms` bigint,
	`accepted_by` varchar(120),
	`provisional` boolean NOT NULL DEFAULT false,
	`superseded_at_ms` bigint,
	`why` varchar(400),
	CONSTRAINT `reference_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `replay_hour` (
	`node_id` int NOT NULL,
	`hour_ms` bigint NOT NULL,
	`marked_at_ms` bigint NOT NULL,
	CONSTRAINT `replay_hour_node_id_hour_ms_pk` PRIMARY KEY(`node_id`,`hour_ms`)
);
--> statement-breakpoint
CREATE TABLE `api_key` (
	`id` int AUTO_INCREMENT NOT NULL,
	`public_id` varchar(16) NOT NULL,
	`secret_hash` binary(32) NOT NULL,
	`name` varchar(120) NOT NULL,
	`scopes` varchar(120) NOT NULL,
	`all_sites` boolean NOT NULL DEFAULT false,
	`origins` text,
	`personal_allowed` boolean NOT NULL DEFAULT false,
	`maker_id` int,
	`created_at_ms` bigint NOT NULL,
	`expires_at_ms` bigint,
	`revoked_at_ms` bigint,
	CONSTRAINT `api_key_id` PRIMARY KEY(`id`),
	CONSTRAINT `api_key_public_id_unique` UNIQUE(`public_id`)
);
--> statement-breakpoint
CREATE TABLE `api_key_site` (
	`key_id` int NOT NULL,
	`site_id` int NOT NULL,
	CONSTRAINT `api_key_site_key_id_site_id_pk` PRIMARY KEY(`key_id`,`site_id`)
);
--> statement-breakpoint
CREATE TABLE `audit` (
	`id` int AUTO_INCREMENT NOT NULL,
	`at_ms` bigint NOT NULL,
	`actor` varchar(64) NOT NULL,
	`site_id` int,
	`what` varchar(64) NOT NULL,
	`subject` varchar(120) NOT NULL,
	`detail` mediumtext,
	CONSTRAINT `audit_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `idempotency` (
	`actor` varchar(64) NOT NULL,
	`idem_key` varchar(128) NOT NULL,
	`request_hash` binary(32) NOT NULL,
	`status` smallint,
	`answer_sealed` mediumblob,
	`created_at_ms` bigint NOT NULL,
	CONSTRAINT `idempotency_actor_idem_key_pk` PRIMARY KEY(`actor`,`idem_key`)
);
--> statement-breakpoint
CREATE TABLE `last_look` (
	`person_id` int NOT NULL,
	`site_id` int NOT NULL,
	`change_id` bigint NOT NULL,
	`at_ms` bigint NOT NULL,
	CONSTRAINT `last_look_person_id_site_id_pk` PRIMARY KEY(`person_id`,`site_id`)
);
--> statement-breakpoint
CREATE TABLE `person` (
	`id` int AUTO_INCREMENT NOT NULL,
	`email` varchar(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_general_ci NOT NULL,
	`name` varchar(120) NOT NULL,
	`initials` varchar(4) NOT NULL,
	`role` enum('operator','maintenance','integrator','admin') NOT NULL,
	`all_sites` boolean NOT NULL DEFAULT false,
	`password_hash` varchar(200),
	`session_version` int NOT NULL DEFAULT 1,
	`must_change_password` boolean NOT NULL DEFAULT false,
	`demo` boolean NOT NULL DEFAULT false,
	`language` varchar(8) NOT NULL DEFAULT 'en',
	`timezone` varchar(64),
	`created_at_ms` bigint NOT NULL,
	`switched_off_at_ms` bigint,
	CONSTRAINT `person_id` PRIMARY KEY(`id`),
	CONSTRAINT `person_email_unique` UNIQUE(`email`)
);
--> statement-breakpoint
CREATE TABLE `person_site` (
	`person_id` int NOT NULL,
	`site_id` int NOT NULL,
	`last_seen_at_ms` bigint,
	CONSTRAINT `person_site_person_id_site_id_pk` PRIMARY KEY(`person_id`,`site_id`)
);
--> statement-breakpoint
CREATE TABLE `ticket` (
	`hash` binary(32) NOT NULL,
	`person_id` int NOT NULL,
	`purpose` enum('invitation','reset') NOT NULL,
	`created_at_ms` bigint NOT NULL,
	`expires_at_ms` bigint NOT NULL,
	`used_at_ms` bigint,
	CONSTRAINT `ticket_hash` PRIMARY KEY(`hash`)
);
--> statement-breakpoint
CREATE TABLE `site` (
	`id` int AUTO_INCREMENT NOT NULL,
	`slug` varchar(32) NOT NULL,
	`name` varchar(120) NOT NULL,
	`lat_deg` double NOT NULL,
	`lon_deg` double NOT NULL,
	`altitude_m` double NOT NULL DEFAULT 0,
	`timezone` varchar(64) NOT NULL,
	`last_change` bigint NOT NULL DEFAULT 0,
	`first_change` bigint NOT NULL DEFAULT 1,
	`grace_s` int NOT NULL DEFAULT 900,
	`pair_rule` enum('calibrate','diagnose','never') NOT NULL DEFAULT 'calibrate',
	`quiet_from_min` smallint NOT NULL DEFAULT 60,
	`quiet_to_min` smallint NOT NULL DEFAULT 300,
	`reading_days` smallint NOT NULL DEFAULT 400,
	`event_days` smallint NOT NULL DEFAULT 800,
	`access_notes` text,
	`demo` boolean NOT NULL DEFAULT false,
	`created_at_ms` bigint NOT NULL,
	`removed_at_ms` bigint,
	CONSTRAINT `site_id` PRIMARY KEY(`id`),
	CONSTRAINT `site_slug_unique` UNIQUE(`slug`)
);
--> statement-breakpoint
CREATE TABLE `zone` (
	`id` int AUTO_INCREMENT NOT NULL,
	`site_id` int NOT NULL,
	`code` varchar(32) NOT NULL,
	`name` varchar(120) NOT NULL,
	CONSTRAINT `zone_id` PRIMARY KEY(`id`),
	CONSTRAINT `zone_site_code` UNIQUE(`site_id`,`code`)
);
--> statement-breakpoint
CREATE TABLE `hearing` (
	`from_ms` bigint NOT NULL,
	`to_ms` bigint NOT NULL,
	CONSTRAINT `hearing_from_ms` PRIMARY KEY(`from_ms`)
);
--> statement-breakpoint
CREATE TABLE `installation` (
	`name` varchar(64) NOT NULL,
	`value` varbinary(512) NOT NULL,
	CONSTRAINT `installation_name` PRIMARY KEY(`name`)
);
--> statement-breakpoint
CREATE TABLE `lease` (
	`name` varchar(64) NOT NULL,
	`holder` varchar(64) NOT NULL,
	`until_ms` bigint NOT NULL,
	CONSTRAINT `lease_name` PRIMARY KEY(`name`)
);
--> statement-breakpoint
CREATE TABLE `outbox` (
	`id` int AUTO_INCREMENT NOT NULL,
	`kind` enum('mail','webhook') NOT NULL,
	`payload_sealed` mediumblob NOT NULL,
	`dedupe` binary(16),
	`created_at_ms` bigint NOT NULL,
	`not_before_ms` bigint NOT NULL,
	`lease_until_ms` bigint,
	`tries` smallint NOT NULL DEFAULT 0,
	`last_error` mediumtext,
	`sent_at_ms` bigint,
	`given_up_at_ms` bigint,
	CONSTRAINT `outbox_id` PRIMARY KEY(`id`),
	CONSTRAINT `outbox_dedupe_unique` UNIQUE(`dedupe`)
);
--> statement-breakpoint
CREATE TABLE `rejected` (
	`id` int AUTO_INCREMENT NOT NULL,
	`at_ms` bigint NOT NULL,
	`serial` varchar(32) NOT NULL,
	`node_id` int,
	`topic` varchar(120) NOT NULL,
	`reason` enum('too_large','not_decodable','wrong_type','too_many_rows','out_of_range','unknown_serial','bad_tag','unsigned_not_allowed','bad_topic','withdrawn') NOT NULL,
	`detail` varchar(200),
	`head` varbinary(512) NOT NULL,
	`length_bytes` int NOT NULL,
	CONSTRAINT `rejected_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `act` ADD CONSTRAINT `act_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `act` ADD CONSTRAINT `act_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `act` ADD CONSTRAINT `act_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `parameter` ADD CONSTRAINT `parameter_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `parameter` ADD CONSTRAINT `parameter_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `bay` ADD CONSTRAINT `bay_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `bay` ADD CONSTRAINT `bay_zone_id_zone_id_fk` FOREIGN KEY (`zone_id`) REFERENCES `zone`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `bay_state` ADD CONSTRAINT `bay_state_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `bay_state` ADD CONSTRAINT `bay_state_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `closure` ADD CONSTRAINT `closure_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `closure` ADD CONSTRAINT `closure_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `history` ADD CONSTRAINT `history_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `change` ADD CONSTRAINT `change_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `change` ADD CONSTRAINT `change_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `change` ADD CONSTRAINT `change_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `event` ADD CONSTRAINT `event_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `event` ADD CONSTRAINT `event_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `boot` ADD CONSTRAINT `boot_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `command` ADD CONSTRAINT `command_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node` ADD CONSTRAINT `node_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node` ADD CONSTRAINT `node_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node` ADD CONSTRAINT `node_profile_code_profile_code_fk` FOREIGN KEY (`profile_code`) REFERENCES `profile`(`code`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node_count` ADD CONSTRAINT `node_count_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node_fast` ADD CONSTRAINT `node_fast_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node_slow` ADD CONSTRAINT `node_slow_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD CONSTRAINT `node_snapshot_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `pulse` ADD CONSTRAINT `pulse_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reading_hour` ADD CONSTRAINT `reading_hour_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `received` ADD CONSTRAINT `received_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reference` ADD CONSTRAINT `reference_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reference` ADD CONSTRAINT `reference_bay_id_bay_id_fk` FOREIGN KEY (`bay_id`) REFERENCES `bay`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `replay_hour` ADD CONSTRAINT `replay_hour_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `api_key` ADD CONSTRAINT `api_key_maker_id_person_id_fk` FOREIGN KEY (`maker_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `api_key_site` ADD CONSTRAINT `api_key_site_key_id_api_key_id_fk` FOREIGN KEY (`key_id`) REFERENCES `api_key`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `api_key_site` ADD CONSTRAINT `api_key_site_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `last_look` ADD CONSTRAINT `last_look_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `last_look` ADD CONSTRAINT `last_look_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `person_site` ADD CONSTRAINT `person_site_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `person_site` ADD CONSTRAINT `person_site_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `ticket` ADD CONSTRAINT `ticket_person_id_person_id_fk` FOREIGN KEY (`person_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `zone` ADD CONSTRAINT `zone_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `act_taken` ON `act` (`taken_at_ms`,`id`);--> statement-breakpoint
CREATE INDEX `act_bay` ON `act` (`bay_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `act_node` ON `act` (`node_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `parameter_site` ON `parameter` (`site_id`,`node_id`);--> statement-breakpoint
CREATE INDEX `bay_state_site_change` ON `bay_state` (`site_id`,`change_id`);--> statement-breakpoint
CREATE INDEX `closure_bay` ON `closure` (`bay_id`,`from_ms`);--> statement-breakpoint
CREATE INDEX `history_bay_at` ON `history` (`bay_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `change_bay` ON `change` (`bay_id`,`id`);--> statement-breakpoint
CREATE INDEX `event_bay_at` ON `event` (`bay_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `event_site_at` ON `event` (`site_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `command_node` ON `command` (`node_id`,`created_at_ms`);--> statement-breakpoint
CREATE INDEX `command_open` ON `command` (`answered_at_ms`,`expires_at_ms`);--> statement-breakpoint
CREATE INDEX `node_site` ON `node` (`site_id`);--> statement-breakpoint
CREATE INDEX `node_bay` ON `node` (`bay_id`);--> statement-breakpoint
CREATE INDEX `pulse_node_at` ON `pulse` (`node_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `reference_node` ON `reference` (`node_id`,`learned_at_ms`);--> statement-breakpoint
CREATE INDEX `audit_at` ON `audit` (`at_ms`);--> statement-breakpoint
CREATE INDEX `audit_site` ON `audit` (`site_id`,`at_ms`);--> statement-breakpoint
CREATE INDEX `idempotency_created` ON `idempotency` (`created_at_ms`);--> statement-breakpoint
CREATE INDEX `outbox_due` ON `outbox` (`sent_at_ms`,`given_up_at_ms`,`not_before_ms`);--> statement-breakpoint
CREATE INDEX `rejected_serial` ON `rejected` (`serial`,`at_ms`);