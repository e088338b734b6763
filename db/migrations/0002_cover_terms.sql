CREATE TYPE "public"."freight_rule" AS ENUM('seller_both', 'customer_in', 'customer_both');--> statement-breakpoint
CREATE TYPE "public"."goodwill_state" AS ENUM('asked', 'granted', 'declined');--> statement-breakpoint
CREATE TYPE "public"."law_region" AS ENUM('EU', 'UK', 'US', 'AU', 'other');--> statement-breakpoint
CREATE TYPE "public"."preview_state" AS ENUM('running', 'done', 'cancelled', 'failed');--> statement-breakpoint
CREATE TYPE "public"."replaced_rule" AS ENUM('later_of_both', 'remainder', 'floor');--> statement-breakpoint
CREATE TYPE "public"."transfer_rule" AS ENUM('first_buyer', 'with_notice', 'follows_serial');--> statement-breakpoint
ALTER TYPE "public"."installation_source" ADD VALUE 'moved';--> statement-breakpoint
ALTER TYPE "public"."entry_kind" ADD VALUE 'goodwill_asked';--> statement-breakpoint
ALTER TYPE "public"."entry_kind" ADD VALUE 'goodwill_granted';--> statement-breakpoint
ALTER TYPE "public"."entry_kind" ADD VALUE 'goodwill_declined';--> statement-breakpoint
CREATE TABLE "goodwill" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"ticket_id" uuid NOT NULL,
	"ticket_unit_id" uuid NOT NULL,
	"account_id" uuid,
	"unit_id" uuid NOT NULL,
	"decision_id" uuid NOT NULL,
	"state" "goodwill_state" NOT NULL,
	"asked_by" uuid NOT NULL,
	"asked_by_name" text NOT NULL,
	"asked_at" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"wanted_remedy" "remedy" NOT NULL,
	"answered_by" uuid,
	"answered_by_name" text,
	"answered_at" timestamp (3) with time zone,
	"answer" text DEFAULT '' NOT NULL,
	"remedy" "remedy",
	"limit_cents" integer,
	CONSTRAINT "goodwill_nobody_grants_their_own" CHECK ("goodwill"."answered_by" is null or "goodwill"."answered_by" <> "goodwill"."asked_by"),
	CONSTRAINT "goodwill_answered" CHECK (("goodwill"."state" = 'asked') = ("goodwill"."answered_by" is null)),
	CONSTRAINT "goodwill_granted_with" CHECK ("goodwill"."state" <> 'granted' or ("goodwill"."remedy" is not null and "goodwill"."limit_cents" is not null))
);
--> statement-breakpoint
CREATE TABLE "law_notice" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"region" "law_region" NOT NULL,
	"for_consumers" boolean NOT NULL,
	"effective_on" date NOT NULL,
	"title" text NOT NULL,
	"words" text NOT NULL,
	"source" text NOT NULL,
	"made_by_name" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "terms_preview" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"terms_version_id" uuid NOT NULL,
	"of_version" integer NOT NULL,
	"state" "preview_state" NOT NULL,
	"total" integer NOT NULL,
	"done" integer DEFAULT 0 NOT NULL,
	"after_id" uuid,
	"answer" jsonb NOT NULL,
	"error" text,
	"created_by_name" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"finished_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "sale_transfer" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sale_line_id" uuid NOT NULL,
	"from_account_id" uuid NOT NULL,
	"to_account_id" uuid NOT NULL,
	"on_day" date NOT NULL,
	"noticed_on" date,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "transfer_to_another" CHECK ("sale_transfer"."from_account_id" <> "sale_transfer"."to_account_id")
);
--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "rolls" boolean DEFAULT true NOT NULL;--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "clock_stops" boolean DEFAULT true NOT NULL;--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "replaced_rule" "replaced_rule" DEFAULT 'later_of_both' NOT NULL;--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "transfer_rule" "transfer_rule";--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "hold_cents" integer;--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "freight" "freight_rule";--> statement-breakpoint
ALTER TABLE "clause" ADD COLUMN "response_hours" integer;--> statement-breakpoint
ALTER TABLE "terms_version" ADD COLUMN "version" integer DEFAULT 1 NOT NULL;--> statement-breakpoint
ALTER TABLE "terms_version" ADD COLUMN "made_by_name" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "installation" ADD COLUMN "swaps" date[] DEFAULT '{}' NOT NULL;--> statement-breakpoint
ALTER TABLE "installation" ADD COLUMN "cover_sale_line_id" uuid;--> statement-breakpoint
ALTER TABLE "installation" ADD COLUMN "noticed_on" date;--> statement-breakpoint
ALTER TABLE "sale_line" ADD COLUMN "installed_on" date;--> statement-breakpoint
ALTER TABLE "sale_line" ADD COLUMN "swaps" date[] DEFAULT '{}' NOT NULL;--> statement-breakpoint
ALTER TABLE "ticket_unit" ADD COLUMN "claim_on" date;--> statement-breakpoint
ALTER TABLE "goodwill" ADD CONSTRAINT "goodwill_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "goodwill" ADD CONSTRAINT "goodwill_ticket_unit_id_ticket_unit_id_fk" FOREIGN KEY ("ticket_unit_id") REFERENCES "public"."ticket_unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "goodwill" ADD CONSTRAINT "goodwill_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "goodwill" ADD CONSTRAINT "goodwill_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "goodwill" ADD CONSTRAINT "goodwill_decision_id_coverage_decision_id_fk" FOREIGN KEY ("decision_id") REFERENCES "public"."coverage_decision"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "terms_preview" ADD CONSTRAINT "terms_preview_terms_version_id_terms_version_id_fk" FOREIGN KEY ("terms_version_id") REFERENCES "public"."terms_version"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sale_transfer" ADD CONSTRAINT "sale_transfer_sale_line_id_sale_line_id_fk" FOREIGN KEY ("sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sale_transfer" ADD CONSTRAINT "sale_transfer_from_account_id_account_id_fk" FOREIGN KEY ("from_account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sale_transfer" ADD CONSTRAINT "sale_transfer_to_account_id_account_id_fk" FOREIGN KEY ("to_account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "goodwill_of_ticket" ON "goodwill" USING btree ("ticket_id");--> statement-breakpoint
CREATE INDEX "goodwill_by_state" ON "goodwill" USING btree ("state","asked_at");--> statement-breakpoint
CREATE UNIQUE INDEX "goodwill_one_open" ON "goodwill" USING btree ("ticket_unit_id") WHERE state = 'asked';--> statement-breakpoint
CREATE UNIQUE INDEX "law_notice_once" ON "law_notice" USING btree ("region","for_consumers","effective_on");--> statement-breakpoint
CREATE INDEX "preview_of_version" ON "terms_preview" USING btree ("terms_version_id","created_at");--> statement-breakpoint
CREATE INDEX "transfer_of_sale" ON "sale_transfer" USING btree ("sale_line_id","on_day");--> statement-breakpoint
ALTER TABLE "installation" ADD CONSTRAINT "installation_cover_sale_line_id_sale_line_id_fk" FOREIGN KEY ("cover_sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "terms_one_draft" ON "terms_version" USING btree ("terms_id") WHERE published_at is null;