ALTER TABLE `pulse` ADD `polarity_after` tinyint DEFAULT 1 NOT NULL;--> statement-breakpoint
ALTER TABLE `pulse` ADD `moving` boolean DEFAULT true NOT NULL;