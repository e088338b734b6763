CREATE INDEX "window_doa_end" ON "cover_window" USING btree ("last_on","sale_line_id") WHERE kind = 'doa';--> statement-breakpoint
CREATE INDEX "installation_covered_elsewhere" ON "installation" USING btree ("cover_sale_line_id") WHERE cover_sale_line_id is not null;--> statement-breakpoint
CREATE INDEX "sale_under_terms" ON "sale_line" USING btree ("terms_version_id");