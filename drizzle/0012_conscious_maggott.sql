CREATE TABLE `node_network` (
	`node_id` int NOT NULL,
	`network` varchar(45) NOT NULL,
	`since_ms` bigint NOT NULL,
	CONSTRAINT `node_network_node_id` PRIMARY KEY(`node_id`)
);
--> statement-breakpoint
ALTER TABLE `node_network` ADD CONSTRAINT `node_network_node_id_node_id_fk` FOREIGN KEY (`node_id`) REFERENCES `node`(`id`) ON DELETE no action ON UPDATE no action;