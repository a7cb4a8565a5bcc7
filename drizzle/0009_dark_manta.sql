CREATE TABLE `wall_link` (
	`id` int AUTO_INCREMENT NOT NULL,
	`token_hash` binary(32) NOT NULL,
	`name` varchar(120) NOT NULL,
	`turn_s` int NOT NULL DEFAULT 0,
	`maker_id` int,
	`created_at_ms` bigint NOT NULL,
	`expires_at_ms` bigint,
	`revoked_at_ms` bigint,
	CONSTRAINT `wall_link_id` PRIMARY KEY(`id`),
	CONSTRAINT `wall_link_token_hash_unique` UNIQUE(`token_hash`)
);
--> statement-breakpoint
CREATE TABLE `wall_link_site` (
	`link_id` int NOT NULL,
	`site_id` int NOT NULL,
	CONSTRAINT `wall_link_site_link_id_site_id_pk` PRIMARY KEY(`link_id`,`site_id`)
);
--> statement-breakpoint
ALTER TABLE `wall_link` ADD CONSTRAINT `wall_link_maker_id_person_id_fk` FOREIGN KEY (`maker_id`) REFERENCES `person`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `wall_link_site` ADD CONSTRAINT `wall_link_site_link_id_wall_link_id_fk` FOREIGN KEY (`link_id`) REFERENCES `wall_link`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `wall_link_site` ADD CONSTRAINT `wall_link_site_site_id_site_id_fk` FOREIGN KEY (`site_id`) REFERENCES `site`(`id`) ON DELETE no action ON UPDATE no action;