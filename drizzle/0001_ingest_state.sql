CREATE TABLE `node_clock` (
	`node_id` int NOT NULL,
	`skews` varbinary(240) NOT NULL,
	CONSTRAINT `node_clock_node_id` PRIMARY KEY(`node_id`)
);
--> statement-breakpoint
ALTER TABLE `history` ADD `recorded_at_ms` bigint DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE `history` ADD `void_recorded_at_ms` bigint;--> statement-breakpoint
ALTER TABLE `node` ADD `usual_period_s` int DEFAULT 60 NOT NULL;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `heard_boot` int unsigned;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `row_at_ms` bigint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `boot` int unsigned;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `seq` int unsigned;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `row` tinyint unsigned;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `waiting_from_ms` bigint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `last_at_ms` bigint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `x` mediumint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `y` mediumint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `z` mediumint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `polarity` tinyint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `temp_dc` smallint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `battery_mv` smallint unsigned;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `rssi_dbm` smallint;--> statement-breakpoint
ALTER TABLE `node_fast` ADD `marks` tinyint unsigned DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `taken_at_ms` bigint NOT NULL;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `daily` boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `row_at_ms` bigint;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `boot` int unsigned;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `seq` int unsigned;--> statement-breakpoint
ALTER TABLE `node_snapshot` ADD `row` tinyint unsigned;--> statement-breakpoint
ALTER TABLE `node_clock` ADD CONSTRAINT `node_clock_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;