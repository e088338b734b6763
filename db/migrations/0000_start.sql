CREATE TYPE "public"."role_name" AS ENUM('agent', 'warehouse', 'manager', 'admin');--> statement-breakpoint
CREATE TYPE "public"."clause_kind" AS ENUM('doa', 'cover', 'replaced_part', 'exclusion', 'fee', 'transfer');--> statement-breakpoint
CREATE TYPE "public"."day_rule" AS ENUM('event_day_excluded', 'start_day_included');--> statement-breakpoint
CREATE TYPE "public"."outcome" AS ENUM('covered', 'covered_doa', 'not_covered', 'needs_person');--> statement-breakpoint
CREATE TYPE "public"."remedy" AS ENUM('advance_replacement', 'replacement_on_receipt', 'repair', 'credit', 'refund');--> statement-breakpoint
CREATE TYPE "public"."start_basis" AS ENUM('shipped', 'delivered', 'invoiced', 'installed');--> statement-breakpoint
CREATE TYPE "public"."window_kind" AS ENUM('doa', 'cover');--> statement-breakpoint
CREATE TYPE "public"."discrepancy_kind" AS ENUM('wrong_unit', 'missing', 'extra', 'damaged_by_carrier', 'no_rma', 'unknown_serial');--> statement-breakpoint
CREATE TYPE "public"."disposition" AS ENUM('restock', 'repair', 'return_to_supplier', 'scrap', 'send_back');--> statement-breakpoint
CREATE TYPE "public"."parcel_state" AS ENUM('expected', 'arrived', 'set_aside');--> statement-breakpoint
CREATE TYPE "public"."photo_subject" AS ENUM('receipt_line', 'discrepancy', 'bench_test', 'shipment');--> statement-breakpoint
CREATE TYPE "public"."received_condition" AS ENUM('good', 'packaging_poor', 'damaged', 'incomplete');--> statement-breakpoint
CREATE TYPE "public"."sanitize_method" AS ENUM('clear', 'purge', 'destroy');--> statement-breakpoint
CREATE TYPE "public"."shipment_direction" AS ENUM('out', 'in');--> statement-breakpoint
CREATE TYPE "public"."step_verdict" AS ENUM('pass', 'fail', 'not_run');--> statement-breakpoint
CREATE TYPE "public"."test_outcome" AS ENUM('fault_confirmed', 'no_fault_found', 'damage_not_covered');--> statement-breakpoint
CREATE TYPE "public"."evidence_kind" AS ENUM('photo', 'video', 'log', 'document');--> statement-breakpoint
CREATE TYPE "public"."evidence_source" AS ENUM('mail', 'portal', 'staff', 'dock', 'bench');--> statement-breakpoint
CREATE TYPE "public"."file_purpose" AS ENUM('evidence', 'dock_photo', 'bench_photo', 'paper', 'import');--> statement-breakpoint
CREATE TYPE "public"."file_state" AS ENUM('pending', 'quarantined', 'clean', 'rejected');--> statement-breakpoint
CREATE TYPE "public"."buyer_kind" AS ENUM('business', 'consumer', 'unknown');--> statement-breakpoint
CREATE TYPE "public"."condition" AS ENUM('new', 'refurbished');--> statement-breakpoint
CREATE TYPE "public"."family" AS ENUM('system', 'board', 'processor', 'memory', 'drive', 'power_supply', 'fan', 'controller', 'network', 'riser', 'chassis', 'battery', 'cable');--> statement-breakpoint
CREATE TYPE "public"."import_state" AS ENUM('previewed', 'applying', 'applied', 'failed', 'cancelled');--> statement-breakpoint
CREATE TYPE "public"."installation_source" AS ENUM('as_built', 'swap');--> statement-breakpoint
CREATE TYPE "public"."unit_kind" AS ENUM('system', 'part');--> statement-breakpoint
CREATE TYPE "public"."whereabouts" AS ENUM('customer', 'transit', 'dock', 'bench', 'stock', 'set_aside', 'supplier', 'scrapped');--> statement-breakpoint
CREATE TYPE "public"."mail_direction" AS ENUM('in', 'out');--> statement-breakpoint
CREATE TYPE "public"."held_state" AS ENUM('held', 'admitted', 'discarded');--> statement-breakpoint
CREATE TYPE "public"."mail_kind" AS ENUM('person', 'auto_reply', 'bounce', 'list', 'calendar', 'unreadable');--> statement-breakpoint
CREATE TYPE "public"."outbox_state" AS ENUM('pending', 'sending', 'sent', 'dead');--> statement-breakpoint
CREATE TYPE "public"."raw_state" AS ENUM('received', 'parsed', 'unreadable', 'duplicate');--> statement-breakpoint
CREATE TYPE "public"."mail_template" AS ENUM('acknowledgement', 'sign_in', 'decision', 'evidence_wanted', 'rma_authorized', 'rma_declined', 'received', 'bench_result', 'shipped', 'settled', 'reply');--> statement-breakpoint
CREATE TYPE "public"."fee_kind" AS ENUM('no_fault_found', 'restocking', 'diagnostic', 'not_returned', 'freight');--> statement-breakpoint
CREATE TYPE "public"."rma_line_state" AS ENUM('open', 'received', 'tested', 'settled', 'cancelled');--> statement-breakpoint
CREATE TYPE "public"."rma_state" AS ENUM('requested', 'authorized', 'in_transit', 'received', 'at_bench', 'settled', 'declined', 'expired', 'withdrawn');--> statement-breakpoint
CREATE TYPE "public"."channel" AS ENUM('mail', 'portal', 'staff');--> statement-breakpoint
CREATE TYPE "public"."entry_kind" AS ENUM('mail_in', 'mail_out', 'mail_auto', 'mail_noted', 'fault_reported', 'evidence_added', 'evidence_wanted', 'unit_tied', 'note', 'decision', 'rma_requested', 'rma_authorized', 'rma_declined', 'rma_expired', 'rma_withdrawn', 'rma_settled', 'parcel_sent', 'dock_received', 'dock_stopped', 'bench_started', 'bench_closed', 'replacement_shipped', 'closed');--> statement-breakpoint
CREATE TYPE "public"."entry_letter" AS ENUM('M', 'E', 'C', 'R', 'D', 'B', 'S', 'N');--> statement-breakpoint
CREATE TYPE "public"."tie_state" AS ENUM('proposed', 'tied', 'dismissed');--> statement-breakpoint
CREATE TYPE "public"."waiting_on" AS ENUM('us', 'customer', 'carrier', 'dock', 'bench', 'supplier', 'nobody');--> statement-breakpoint
CREATE SEQUENCE "public"."rma_number" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1201 CACHE 1;--> statement-breakpoint
CREATE SEQUENCE "public"."ticket_number" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 3001 CACHE 1;--> statement-breakpoint
CREATE TABLE "audit_row" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"actor_kind" text NOT NULL,
	"actor_id" uuid,
	"actor_name" text NOT NULL,
	"act" text NOT NULL,
	"subject_type" text NOT NULL,
	"subject_id" text NOT NULL,
	"before" jsonb,
	"after" jsonb,
	"request_id" text NOT NULL,
	"chain_no" bigint,
	"previous_hash" "bytea",
	"hash" "bytea"
);
--> statement-breakpoint
CREATE TABLE "idempotency_key" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"key" text NOT NULL,
	"actor_id" uuid NOT NULL,
	"request_hash" text NOT NULL,
	"status" bigint,
	"body" jsonb,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "attempt" (
	"key" text NOT NULL,
	"window_start" timestamp (3) with time zone NOT NULL,
	"count" integer NOT NULL,
	CONSTRAINT "attempt_key_window_start_pk" PRIMARY KEY("key","window_start")
);
--> statement-breakpoint
CREATE TABLE "auth_account" (
	"user_id" uuid NOT NULL,
	"type" text NOT NULL,
	"provider" text NOT NULL,
	"provider_account_id" text NOT NULL,
	"refresh_token" text,
	"access_token" text,
	"expires_at" integer,
	"token_type" text,
	"scope" text,
	"id_token" text,
	"session_state" text,
	CONSTRAINT "auth_account_provider_provider_account_id_pk" PRIMARY KEY("provider","provider_account_id")
);
--> statement-breakpoint
CREATE TABLE "session" (
	"session_token" text PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"expires" timestamp (3) with time zone NOT NULL,
	"second_factor_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "user_role" (
	"user_id" uuid NOT NULL,
	"role" "role_name" NOT NULL,
	CONSTRAINT "user_role_user_id_role_pk" PRIMARY KEY("user_id","role")
);
--> statement-breakpoint
CREATE TABLE "user" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text,
	"email" text NOT NULL,
	"email_verified" timestamp (3) with time zone,
	"image" text,
	"post" text,
	"theme" text DEFAULT 'system' NOT NULL,
	"ended_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "verification_token" (
	"identifier" text NOT NULL,
	"token" text NOT NULL,
	"expires" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "verification_token_identifier_token_pk" PRIMARY KEY("identifier","token")
);
--> statement-breakpoint
CREATE TABLE "clause" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"terms_version_id" uuid NOT NULL,
	"number" text NOT NULL,
	"kind" "clause_kind" NOT NULL,
	"title" text NOT NULL,
	"families" "family"[] DEFAULT '{}' NOT NULL,
	"condition" "condition",
	"period" text,
	"start_basis" "start_basis",
	"delivery_grace_days" integer DEFAULT 0 NOT NULL,
	"day_rule" "day_rule" DEFAULT 'event_day_excluded' NOT NULL,
	"remedies" "remedy"[] DEFAULT '{}' NOT NULL,
	"due_back_days" integer,
	"endurance_hours" integer,
	"endurance_tb" integer,
	"exclusion" text,
	"evidence" text[] DEFAULT '{}' NOT NULL,
	"fee_kind" text,
	"fee_cents" integer,
	"words" text DEFAULT '' NOT NULL,
	"sort" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "cover_window" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sale_line_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"unit_id" uuid NOT NULL,
	"installation_id" uuid,
	"clause_id" uuid NOT NULL,
	"kind" "window_kind" NOT NULL,
	"first_on" date NOT NULL,
	"last_on" date NOT NULL,
	"by_floor" integer DEFAULT 0 NOT NULL,
	"engine" text NOT NULL,
	CONSTRAINT "window_days" CHECK ("cover_window"."last_on" >= "cover_window"."first_on")
);
--> statement-breakpoint
CREATE TABLE "coverage_decision" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"ticket_id" uuid NOT NULL,
	"ticket_unit_id" uuid,
	"account_id" uuid,
	"unit_id" uuid,
	"sale_line_id" uuid,
	"engine" text NOT NULL,
	"inputs" jsonb NOT NULL,
	"outcome" "outcome" NOT NULL,
	"answer" jsonb NOT NULL,
	"remedies" "remedy"[] NOT NULL,
	"claim_on" date NOT NULL,
	"last_covered_on" date,
	"previous_id" uuid,
	"made_by" uuid,
	"made_by_name" text NOT NULL,
	"made_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "terms" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "terms_version" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"terms_id" uuid NOT NULL,
	"issue" integer NOT NULL,
	"effective_on" date NOT NULL,
	"published_at" timestamp (3) with time zone,
	"note" text DEFAULT '' NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "bench_test" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_line_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"unit_id" uuid NOT NULL,
	"sheet" text NOT NULL,
	"sheet_issue" integer NOT NULL,
	"started_at" timestamp (3) with time zone NOT NULL,
	"started_by_name" text NOT NULL,
	"scan_in" text NOT NULL,
	"scan_out" text,
	"outcome" "test_outcome",
	"finding" text DEFAULT '' NOT NULL,
	"disposition" "disposition",
	"second_person_name" text,
	"closed_at" timestamp (3) with time zone,
	"closed_by_name" text,
	"version" integer DEFAULT 1 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "discrepancy" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"kind" "discrepancy_kind" NOT NULL,
	"rma_id" uuid,
	"parcel_id" uuid,
	"scanned" text NOT NULL,
	"expected" text,
	"unit_id" uuid,
	"place" text NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"found_at" timestamp (3) with time zone NOT NULL,
	"found_by_name" text NOT NULL,
	"cleared_at" timestamp (3) with time zone,
	"client_id" uuid NOT NULL
);
--> statement-breakpoint
CREATE TABLE "parcel" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_id" uuid,
	"site_id" uuid NOT NULL,
	"state" "parcel_state" NOT NULL,
	"carrier" text,
	"tracking" text,
	"expected_on" date,
	"arrived_at" timestamp (3) with time zone,
	"place" text,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "photo" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"file_id" uuid NOT NULL,
	"subject" "photo_subject" NOT NULL,
	"subject_id" uuid NOT NULL,
	"slot" text NOT NULL,
	"taken_at" timestamp (3) with time zone NOT NULL,
	"taken_by_name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "receipt_line" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_line_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"parcel_id" uuid,
	"unit_id" uuid NOT NULL,
	"scanned" text NOT NULL,
	"condition" "received_condition" NOT NULL,
	"place" text NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"received_at" timestamp (3) with time zone NOT NULL,
	"received_by_name" text NOT NULL,
	"client_id" uuid NOT NULL
);
--> statement-breakpoint
CREATE TABLE "replacement" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_line_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"unit_out_id" uuid NOT NULL,
	"unit_replaced_id" uuid NOT NULL,
	"installation_id" uuid,
	"shipment_id" uuid,
	"last_covered_on" date,
	"reasons" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"warnings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"scanned_out_at" timestamp (3) with time zone NOT NULL,
	"scanned_out_by_name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sanitization_record" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"unit_id" uuid NOT NULL,
	"bench_test_id" uuid,
	"method" "sanitize_method" NOT NULL,
	"technique" text NOT NULL,
	"tool" text NOT NULL,
	"verification" text NOT NULL,
	"done_at" timestamp (3) with time zone NOT NULL,
	"done_by_name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "shipment" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"direction" "shipment_direction" NOT NULL,
	"carrier" text NOT NULL,
	"tracking" text DEFAULT '' NOT NULL,
	"shipped_at" timestamp (3) with time zone NOT NULL,
	"shipped_by_name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "step_reading" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"bench_test_id" uuid NOT NULL,
	"step" integer NOT NULL,
	"value" text DEFAULT '' NOT NULL,
	"verdict" "step_verdict" NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"by_name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "evidence" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"file_id" uuid NOT NULL,
	"ticket_id" uuid,
	"ticket_unit_id" uuid,
	"account_id" uuid,
	"report_id" uuid,
	"kind" "evidence_kind" NOT NULL,
	"source" "evidence_source" NOT NULL,
	"wanted" text,
	"caption" text DEFAULT '' NOT NULL,
	"from_name" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "reading" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"evidence_id" uuid NOT NULL,
	"account_id" uuid,
	"field" text NOT NULL,
	"value" text NOT NULL,
	"measure" text,
	"lines" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "report" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"account_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"answers" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"ticket_id" uuid,
	"created_at" timestamp (3) with time zone NOT NULL,
	"updated_at" timestamp (3) with time zone NOT NULL,
	"sent_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "file" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"key" text,
	"purpose" "file_purpose" NOT NULL,
	"account_id" uuid,
	"state" "file_state" NOT NULL,
	"name" text NOT NULL,
	"declared_type" text NOT NULL,
	"declared_size" bigint NOT NULL,
	"type" text,
	"size" bigint,
	"sha256" text,
	"width" integer,
	"height" integer,
	"reason" text,
	"uploaded_by" uuid,
	"created_at" timestamp (3) with time zone NOT NULL,
	"checked_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "account" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"buyer_kind" "buyer_kind" NOT NULL,
	"country" char(2) NOT NULL,
	"zone" text DEFAULT 'Europe/London' NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "contact" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"account_id" uuid NOT NULL,
	"name" text NOT NULL,
	"email" text NOT NULL,
	"user_id" uuid,
	"may_invite" boolean DEFAULT false NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "contact_email_lower" CHECK ("contact"."email" = lower("contact"."email"))
);
--> statement-breakpoint
CREATE TABLE "cover_pause" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sale_line_id" uuid NOT NULL,
	"from_on" date NOT NULL,
	"to_on" date NOT NULL,
	"reason" text NOT NULL,
	CONSTRAINT "pause_days" CHECK ("cover_pause"."to_on" >= "cover_pause"."from_on")
);
--> statement-breakpoint
CREATE TABLE "holiday" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"day" date NOT NULL,
	"name" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "import_batch" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"file_name" text NOT NULL,
	"sha256" text NOT NULL,
	"content" "bytea" NOT NULL,
	"state" "import_state" NOT NULL,
	"rows_total" integer NOT NULL,
	"rows_good" integer NOT NULL,
	"rows_done" integer DEFAULT 0 NOT NULL,
	"added" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"problems" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"problems_total" integer DEFAULT 0 NOT NULL,
	"error" text,
	"created_by" uuid,
	"created_at" timestamp (3) with time zone NOT NULL,
	"finished_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "installation" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"parent_unit_id" uuid NOT NULL,
	"unit_id" uuid NOT NULL,
	"slot" text NOT NULL,
	"sale_line_id" uuid,
	"source" "installation_source" NOT NULL,
	"from_on" date NOT NULL,
	"to_on" date,
	"removed_reason" text,
	"replaces_id" uuid,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "installation_days" CHECK ("installation"."to_on" is null or "installation"."to_on" >= "installation"."from_on"),
	CONSTRAINT "installation_not_self" CHECK ("installation"."parent_unit_id" <> "installation"."unit_id")
);
--> statement-breakpoint
CREATE TABLE "lot" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"supplier_id" uuid NOT NULL,
	"model_id" uuid
);
--> statement-breakpoint
CREATE TABLE "model" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"kind" "unit_kind" NOT NULL,
	"family" "family" NOT NULL,
	"maker" text DEFAULT '' NOT NULL,
	"facts" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"weight_kg" numeric(7, 2),
	"data_bearing" boolean DEFAULT false NOT NULL,
	"battery" text DEFAULT 'none' NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sale_line" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"unit_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"order_number" text NOT NULL,
	"line_key" text NOT NULL,
	"invoiced_on" date,
	"shipped_on" date NOT NULL,
	"delivered_on" date,
	"terms_version_id" uuid NOT NULL,
	"condition" "condition" NOT NULL,
	"buyer_kind" "buyer_kind" NOT NULL,
	"country" char(2) NOT NULL,
	"site_note" text,
	"ended_on" date,
	"ended_reason" text,
	"import_id" uuid,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "site" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"zone" text NOT NULL,
	"address_lines" text[] NOT NULL,
	"country" char(2) NOT NULL,
	"workdays" integer[] NOT NULL,
	"opens_at" text NOT NULL,
	"closes_at" text NOT NULL,
	"is_default" boolean DEFAULT false NOT NULL
);
--> statement-breakpoint
CREATE TABLE "supplier" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"email" text
);
--> statement-breakpoint
CREATE TABLE "unit" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"serial" text NOT NULL,
	"serial_key" text NOT NULL,
	"serial_loose" text NOT NULL,
	"model_id" uuid NOT NULL,
	"lot_id" uuid,
	"condition" "condition" NOT NULL,
	"whereabouts" "whereabouts" NOT NULL,
	"place" text,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "held_mail" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"message_id" uuid NOT NULL,
	"hint_ticket_id" uuid,
	"reason" text NOT NULL,
	"state" "held_state" NOT NULL,
	"held_at" timestamp (3) with time zone NOT NULL,
	"decided_at" timestamp (3) with time zone,
	"decided_by" uuid
);
--> statement-breakpoint
CREATE TABLE "message" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"direction" "mail_direction" NOT NULL,
	"ticket_id" uuid,
	"account_id" uuid,
	"raw_mail_id" uuid,
	"message_id" text NOT NULL,
	"in_reply_to" text,
	"references" text[] DEFAULT '{}' NOT NULL,
	"kind" "mail_kind" NOT NULL,
	"from_email" text NOT NULL,
	"from_name" text DEFAULT '' NOT NULL,
	"to_emails" text[] DEFAULT '{}' NOT NULL,
	"subject" text NOT NULL,
	"sent_at" timestamp (3) with time zone NOT NULL,
	"text" text DEFAULT '' NOT NULL,
	"html" text,
	"folds" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"proof" text DEFAULT 'not_checked' NOT NULL,
	"filing" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"content_hash" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "outbox" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"message_row_id" uuid NOT NULL,
	"ticket_id" uuid,
	"to_email" text NOT NULL,
	"to_name" text DEFAULT '' NOT NULL,
	"template" "mail_template" NOT NULL,
	"props" jsonb NOT NULL,
	"automatic" boolean NOT NULL,
	"attachments" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"reply_to" text,
	"state" "outbox_state" NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"next_at" timestamp (3) with time zone NOT NULL,
	"lease_until" timestamp (3) with time zone,
	"last_error" text,
	"created_at" timestamp (3) with time zone NOT NULL,
	"sent_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "raw_mail" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"received_at" timestamp (3) with time zone NOT NULL,
	"envelope_from" text NOT NULL,
	"envelope_to" text[] NOT NULL,
	"remote_address" text NOT NULL,
	"size" integer NOT NULL,
	"sha256" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"state" "raw_state" NOT NULL,
	"error" text
);
--> statement-breakpoint
CREATE TABLE "fee_notice" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_line_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"kind" "fee_kind" NOT NULL,
	"cents" integer NOT NULL,
	"currency" char(3) NOT NULL,
	"words" text NOT NULL,
	"noticed_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "rma_line" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"rma_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"ticket_unit_id" uuid NOT NULL,
	"unit_id" uuid NOT NULL,
	"decision_id" uuid,
	"remedy" "remedy" NOT NULL,
	"fault_words" text NOT NULL,
	"state" "rma_line_state" NOT NULL,
	"sort" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "rma" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" text NOT NULL,
	"ticket_id" uuid NOT NULL,
	"account_id" uuid NOT NULL,
	"state" "rma_state" NOT NULL,
	"remedy" "remedy" NOT NULL,
	"site_id" uuid NOT NULL,
	"authorized_at" timestamp (3) with time zone,
	"authorized_by_name" text,
	"expires_on" date,
	"due_back_on" date,
	"ship_to" text[] DEFAULT '{}' NOT NULL,
	"battery" jsonb,
	"reason" text,
	"settled_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "entry" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"ticket_id" uuid NOT NULL,
	"account_id" uuid,
	"letter" "entry_letter" NOT NULL,
	"number" integer NOT NULL,
	"kind" "entry_kind" NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"actor_kind" text NOT NULL,
	"actor_id" uuid,
	"actor_name" text NOT NULL,
	"customer_sees" boolean NOT NULL,
	"line" text NOT NULL,
	"data" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"seq" integer NOT NULL,
	CONSTRAINT "entry_number_from_one" CHECK ("entry"."number" >= 1)
);
--> statement-breakpoint
CREATE TABLE "ticket_participant" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"ticket_id" uuid NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "ticket_unit" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"ticket_id" uuid NOT NULL,
	"account_id" uuid,
	"unit_id" uuid NOT NULL,
	"system_unit_id" uuid,
	"slot" text,
	"fault_class" text,
	"fault_words" text DEFAULT '' NOT NULL,
	"answers" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"state" "tie_state" NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "ticket" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" integer NOT NULL,
	"account_id" uuid,
	"contact_id" uuid,
	"person_name" text NOT NULL,
	"person_email" text NOT NULL,
	"channel" "channel" NOT NULL,
	"subject" text NOT NULL,
	"fault_words" text NOT NULL,
	"received_at" timestamp (3) with time zone NOT NULL,
	"claim_on" date NOT NULL,
	"waiting_on" "waiting_on" NOT NULL,
	"waiting_for" text NOT NULL,
	"clock_started_at" timestamp (3) with time zone,
	"due_at" timestamp (3) with time zone,
	"chase_on" date,
	"closed_at" timestamp (3) with time zone,
	"last_entry_at" timestamp (3) with time zone NOT NULL,
	"last_entry_line" text NOT NULL,
	"evidence_wanted" integer DEFAULT 0 NOT NULL,
	"evidence_came" integer DEFAULT 0 NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
ALTER TABLE "auth_account" ADD CONSTRAINT "auth_account_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "user_role" ADD CONSTRAINT "user_role_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clause" ADD CONSTRAINT "clause_terms_version_id_terms_version_id_fk" FOREIGN KEY ("terms_version_id") REFERENCES "public"."terms_version"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_window" ADD CONSTRAINT "cover_window_sale_line_id_sale_line_id_fk" FOREIGN KEY ("sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_window" ADD CONSTRAINT "cover_window_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_window" ADD CONSTRAINT "cover_window_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_window" ADD CONSTRAINT "cover_window_installation_id_installation_id_fk" FOREIGN KEY ("installation_id") REFERENCES "public"."installation"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_window" ADD CONSTRAINT "cover_window_clause_id_clause_id_fk" FOREIGN KEY ("clause_id") REFERENCES "public"."clause"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "coverage_decision_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "coverage_decision_ticket_unit_id_ticket_unit_id_fk" FOREIGN KEY ("ticket_unit_id") REFERENCES "public"."ticket_unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "coverage_decision_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "coverage_decision_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "coverage_decision_sale_line_id_sale_line_id_fk" FOREIGN KEY ("sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "terms_version" ADD CONSTRAINT "terms_version_terms_id_terms_id_fk" FOREIGN KEY ("terms_id") REFERENCES "public"."terms"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_test" ADD CONSTRAINT "bench_test_rma_line_id_rma_line_id_fk" FOREIGN KEY ("rma_line_id") REFERENCES "public"."rma_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_test" ADD CONSTRAINT "bench_test_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_test" ADD CONSTRAINT "bench_test_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "discrepancy" ADD CONSTRAINT "discrepancy_rma_id_rma_id_fk" FOREIGN KEY ("rma_id") REFERENCES "public"."rma"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "discrepancy" ADD CONSTRAINT "discrepancy_parcel_id_parcel_id_fk" FOREIGN KEY ("parcel_id") REFERENCES "public"."parcel"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "discrepancy" ADD CONSTRAINT "discrepancy_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parcel" ADD CONSTRAINT "parcel_rma_id_rma_id_fk" FOREIGN KEY ("rma_id") REFERENCES "public"."rma"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parcel" ADD CONSTRAINT "parcel_site_id_site_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."site"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "photo" ADD CONSTRAINT "photo_file_id_file_id_fk" FOREIGN KEY ("file_id") REFERENCES "public"."file"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "receipt_line" ADD CONSTRAINT "receipt_line_rma_line_id_rma_line_id_fk" FOREIGN KEY ("rma_line_id") REFERENCES "public"."rma_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "receipt_line" ADD CONSTRAINT "receipt_line_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "receipt_line" ADD CONSTRAINT "receipt_line_parcel_id_parcel_id_fk" FOREIGN KEY ("parcel_id") REFERENCES "public"."parcel"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "receipt_line" ADD CONSTRAINT "receipt_line_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_rma_line_id_rma_line_id_fk" FOREIGN KEY ("rma_line_id") REFERENCES "public"."rma_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_unit_out_id_unit_id_fk" FOREIGN KEY ("unit_out_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_unit_replaced_id_unit_id_fk" FOREIGN KEY ("unit_replaced_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_installation_id_installation_id_fk" FOREIGN KEY ("installation_id") REFERENCES "public"."installation"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replacement" ADD CONSTRAINT "replacement_shipment_id_shipment_id_fk" FOREIGN KEY ("shipment_id") REFERENCES "public"."shipment"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sanitization_record" ADD CONSTRAINT "sanitization_record_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sanitization_record" ADD CONSTRAINT "sanitization_record_bench_test_id_bench_test_id_fk" FOREIGN KEY ("bench_test_id") REFERENCES "public"."bench_test"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "shipment" ADD CONSTRAINT "shipment_rma_id_rma_id_fk" FOREIGN KEY ("rma_id") REFERENCES "public"."rma"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "shipment" ADD CONSTRAINT "shipment_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "step_reading" ADD CONSTRAINT "step_reading_bench_test_id_bench_test_id_fk" FOREIGN KEY ("bench_test_id") REFERENCES "public"."bench_test"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "evidence" ADD CONSTRAINT "evidence_file_id_file_id_fk" FOREIGN KEY ("file_id") REFERENCES "public"."file"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "evidence" ADD CONSTRAINT "evidence_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "evidence" ADD CONSTRAINT "evidence_ticket_unit_id_ticket_unit_id_fk" FOREIGN KEY ("ticket_unit_id") REFERENCES "public"."ticket_unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "evidence" ADD CONSTRAINT "evidence_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reading" ADD CONSTRAINT "reading_evidence_id_evidence_id_fk" FOREIGN KEY ("evidence_id") REFERENCES "public"."evidence"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reading" ADD CONSTRAINT "reading_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "report" ADD CONSTRAINT "report_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "report" ADD CONSTRAINT "report_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "file" ADD CONSTRAINT "file_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "contact" ADD CONSTRAINT "contact_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "contact" ADD CONSTRAINT "contact_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cover_pause" ADD CONSTRAINT "cover_pause_sale_line_id_sale_line_id_fk" FOREIGN KEY ("sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "holiday" ADD CONSTRAINT "holiday_site_id_site_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."site"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "installation" ADD CONSTRAINT "installation_parent_unit_id_unit_id_fk" FOREIGN KEY ("parent_unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "installation" ADD CONSTRAINT "installation_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "installation" ADD CONSTRAINT "installation_sale_line_id_sale_line_id_fk" FOREIGN KEY ("sale_line_id") REFERENCES "public"."sale_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lot" ADD CONSTRAINT "lot_supplier_id_supplier_id_fk" FOREIGN KEY ("supplier_id") REFERENCES "public"."supplier"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lot" ADD CONSTRAINT "lot_model_id_model_id_fk" FOREIGN KEY ("model_id") REFERENCES "public"."model"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sale_line" ADD CONSTRAINT "sale_line_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sale_line" ADD CONSTRAINT "sale_line_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "unit" ADD CONSTRAINT "unit_model_id_model_id_fk" FOREIGN KEY ("model_id") REFERENCES "public"."model"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "unit" ADD CONSTRAINT "unit_lot_id_lot_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lot"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "held_mail" ADD CONSTRAINT "held_mail_message_id_message_id_fk" FOREIGN KEY ("message_id") REFERENCES "public"."message"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "held_mail" ADD CONSTRAINT "held_mail_hint_ticket_id_ticket_id_fk" FOREIGN KEY ("hint_ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "message" ADD CONSTRAINT "message_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "message" ADD CONSTRAINT "message_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "message" ADD CONSTRAINT "message_raw_mail_id_raw_mail_id_fk" FOREIGN KEY ("raw_mail_id") REFERENCES "public"."raw_mail"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "outbox" ADD CONSTRAINT "outbox_message_row_id_message_id_fk" FOREIGN KEY ("message_row_id") REFERENCES "public"."message"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "outbox" ADD CONSTRAINT "outbox_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fee_notice" ADD CONSTRAINT "fee_notice_rma_line_id_rma_line_id_fk" FOREIGN KEY ("rma_line_id") REFERENCES "public"."rma_line"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fee_notice" ADD CONSTRAINT "fee_notice_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma_line" ADD CONSTRAINT "rma_line_rma_id_rma_id_fk" FOREIGN KEY ("rma_id") REFERENCES "public"."rma"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma_line" ADD CONSTRAINT "rma_line_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma_line" ADD CONSTRAINT "rma_line_ticket_unit_id_ticket_unit_id_fk" FOREIGN KEY ("ticket_unit_id") REFERENCES "public"."ticket_unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma_line" ADD CONSTRAINT "rma_line_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma_line" ADD CONSTRAINT "rma_line_decision_id_coverage_decision_id_fk" FOREIGN KEY ("decision_id") REFERENCES "public"."coverage_decision"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma" ADD CONSTRAINT "rma_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma" ADD CONSTRAINT "rma_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rma" ADD CONSTRAINT "rma_site_id_site_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."site"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry" ADD CONSTRAINT "entry_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry" ADD CONSTRAINT "entry_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket_participant" ADD CONSTRAINT "ticket_participant_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket_unit" ADD CONSTRAINT "ticket_unit_ticket_id_ticket_id_fk" FOREIGN KEY ("ticket_id") REFERENCES "public"."ticket"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket_unit" ADD CONSTRAINT "ticket_unit_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket_unit" ADD CONSTRAINT "ticket_unit_unit_id_unit_id_fk" FOREIGN KEY ("unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket_unit" ADD CONSTRAINT "ticket_unit_system_unit_id_unit_id_fk" FOREIGN KEY ("system_unit_id") REFERENCES "public"."unit"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_account_id_account_id_fk" FOREIGN KEY ("account_id") REFERENCES "public"."account"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_contact_id_contact_id_fk" FOREIGN KEY ("contact_id") REFERENCES "public"."contact"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "audit_chain_once" ON "audit_row" USING btree ("chain_no");--> statement-breakpoint
CREATE INDEX "audit_of_subject" ON "audit_row" USING btree ("subject_type","subject_id");--> statement-breakpoint
CREATE INDEX "audit_by_time" ON "audit_row" USING btree ("at");--> statement-breakpoint
CREATE UNIQUE INDEX "idempotency_key_once" ON "idempotency_key" USING btree ("actor_id","key");--> statement-breakpoint
CREATE INDEX "session_of_user" ON "session" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "user_email_once" ON "user" USING btree ("email");--> statement-breakpoint
CREATE UNIQUE INDEX "clause_number_once" ON "clause" USING btree ("terms_version_id","number");--> statement-breakpoint
CREATE INDEX "window_of_sale" ON "cover_window" USING btree ("sale_line_id");--> statement-breakpoint
CREATE INDEX "window_of_unit" ON "cover_window" USING btree ("unit_id");--> statement-breakpoint
CREATE INDEX "window_of_installation" ON "cover_window" USING btree ("installation_id");--> statement-breakpoint
CREATE INDEX "decision_of_ticket" ON "coverage_decision" USING btree ("ticket_id","made_at");--> statement-breakpoint
CREATE INDEX "decision_of_unit" ON "coverage_decision" USING btree ("unit_id");--> statement-breakpoint
CREATE UNIQUE INDEX "terms_code_once" ON "terms" USING btree ("code");--> statement-breakpoint
CREATE UNIQUE INDEX "terms_issue_once" ON "terms_version" USING btree ("terms_id","issue");--> statement-breakpoint
CREATE UNIQUE INDEX "bench_one_per_line" ON "bench_test" USING btree ("rma_line_id");--> statement-breakpoint
CREATE INDEX "bench_of_unit" ON "bench_test" USING btree ("unit_id");--> statement-breakpoint
CREATE INDEX "bench_open" ON "bench_test" USING btree ("started_at") WHERE closed_at is null;--> statement-breakpoint
CREATE UNIQUE INDEX "discrepancy_client_once" ON "discrepancy" USING btree ("client_id");--> statement-breakpoint
CREATE INDEX "discrepancy_open" ON "discrepancy" USING btree ("found_at") WHERE cleared_at is null;--> statement-breakpoint
CREATE INDEX "parcel_of_rma" ON "parcel" USING btree ("rma_id");--> statement-breakpoint
CREATE INDEX "parcel_expected" ON "parcel" USING btree ("expected_on") WHERE state = 'expected';--> statement-breakpoint
CREATE UNIQUE INDEX "photo_once" ON "photo" USING btree ("file_id");--> statement-breakpoint
CREATE INDEX "photo_of_subject" ON "photo" USING btree ("subject","subject_id");--> statement-breakpoint
CREATE UNIQUE INDEX "receipt_one_per_line" ON "receipt_line" USING btree ("rma_line_id");--> statement-breakpoint
CREATE UNIQUE INDEX "receipt_client_once" ON "receipt_line" USING btree ("client_id");--> statement-breakpoint
CREATE UNIQUE INDEX "replacement_one_per_line" ON "replacement" USING btree ("rma_line_id");--> statement-breakpoint
CREATE INDEX "replacement_out" ON "replacement" USING btree ("unit_out_id");--> statement-breakpoint
CREATE INDEX "sanitized_unit" ON "sanitization_record" USING btree ("unit_id");--> statement-breakpoint
CREATE INDEX "shipment_of_rma" ON "shipment" USING btree ("rma_id");--> statement-breakpoint
CREATE UNIQUE INDEX "reading_once" ON "step_reading" USING btree ("bench_test_id","step");--> statement-breakpoint
CREATE UNIQUE INDEX "evidence_one_per_file" ON "evidence" USING btree ("file_id");--> statement-breakpoint
CREATE INDEX "evidence_of_ticket" ON "evidence" USING btree ("ticket_id");--> statement-breakpoint
CREATE INDEX "evidence_of_report" ON "evidence" USING btree ("report_id");--> statement-breakpoint
CREATE INDEX "reading_of_evidence" ON "reading" USING btree ("evidence_id");--> statement-breakpoint
CREATE INDEX "report_of_account" ON "report" USING btree ("account_id","created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "file_key_once" ON "file" USING btree ("key");--> statement-breakpoint
CREATE INDEX "file_of_account" ON "file" USING btree ("account_id");--> statement-breakpoint
CREATE UNIQUE INDEX "account_code_once" ON "account" USING btree ("code");--> statement-breakpoint
CREATE UNIQUE INDEX "contact_email_once" ON "contact" USING btree ("email");--> statement-breakpoint
CREATE UNIQUE INDEX "contact_user_once" ON "contact" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "contact_of_account" ON "contact" USING btree ("account_id");--> statement-breakpoint
CREATE INDEX "pause_of_sale" ON "cover_pause" USING btree ("sale_line_id");--> statement-breakpoint
CREATE UNIQUE INDEX "holiday_once" ON "holiday" USING btree ("site_id","day");--> statement-breakpoint
CREATE INDEX "import_by_sha" ON "import_batch" USING btree ("sha256");--> statement-breakpoint
CREATE INDEX "import_by_time" ON "import_batch" USING btree ("created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "installation_one_place" ON "installation" USING btree ("unit_id") WHERE to_on is null;--> statement-breakpoint
CREATE UNIQUE INDEX "installation_one_unit" ON "installation" USING btree ("parent_unit_id","slot") WHERE to_on is null;--> statement-breakpoint
CREATE INDEX "installation_of_parent" ON "installation" USING btree ("parent_unit_id");--> statement-breakpoint
CREATE INDEX "installation_of_unit" ON "installation" USING btree ("unit_id");--> statement-breakpoint
CREATE INDEX "installation_of_sale" ON "installation" USING btree ("sale_line_id");--> statement-breakpoint
CREATE UNIQUE INDEX "lot_code_once" ON "lot" USING btree ("supplier_id","code");--> statement-breakpoint
CREATE UNIQUE INDEX "model_code_once" ON "model" USING btree ("code");--> statement-breakpoint
CREATE INDEX "model_by_family" ON "model" USING btree ("family");--> statement-breakpoint
CREATE UNIQUE INDEX "sale_line_once" ON "sale_line" USING btree ("line_key");--> statement-breakpoint
CREATE INDEX "sale_of_unit" ON "sale_line" USING btree ("unit_id","shipped_on");--> statement-breakpoint
CREATE INDEX "sale_of_account" ON "sale_line" USING btree ("account_id","shipped_on","id");--> statement-breakpoint
CREATE INDEX "sale_of_order" ON "sale_line" USING btree ("order_number");--> statement-breakpoint
CREATE UNIQUE INDEX "sale_line_one_open" ON "sale_line" USING btree ("unit_id") WHERE ended_on is null;--> statement-breakpoint
CREATE UNIQUE INDEX "site_code_once" ON "site" USING btree ("code");--> statement-breakpoint
CREATE UNIQUE INDEX "site_one_default" ON "site" USING btree ("is_default") WHERE is_default;--> statement-breakpoint
CREATE UNIQUE INDEX "supplier_code_once" ON "supplier" USING btree ("code");--> statement-breakpoint
CREATE UNIQUE INDEX "unit_serial_once" ON "unit" USING btree ("serial_key");--> statement-breakpoint
CREATE INDEX "unit_by_loose" ON "unit" USING btree ("serial_loose");--> statement-breakpoint
CREATE INDEX "unit_by_model" ON "unit" USING btree ("model_id");--> statement-breakpoint
CREATE INDEX "unit_in_stock" ON "unit" USING btree ("model_id","whereabouts") WHERE whereabouts = 'stock';--> statement-breakpoint
CREATE UNIQUE INDEX "held_once" ON "held_mail" USING btree ("message_id");--> statement-breakpoint
CREATE INDEX "held_open" ON "held_mail" USING btree ("held_at") WHERE state = 'held';--> statement-breakpoint
CREATE UNIQUE INDEX "message_out_once" ON "message" USING btree ("message_id") WHERE direction = 'out';--> statement-breakpoint
CREATE UNIQUE INDEX "message_in_once" ON "message" USING btree ("message_id","content_hash") WHERE direction = 'in';--> statement-breakpoint
CREATE INDEX "message_by_id" ON "message" USING btree ("message_id");--> statement-breakpoint
CREATE INDEX "message_of_ticket" ON "message" USING btree ("ticket_id","sent_at");--> statement-breakpoint
CREATE INDEX "message_from" ON "message" USING btree ("from_email");--> statement-breakpoint
CREATE UNIQUE INDEX "outbox_one_per_message" ON "outbox" USING btree ("message_row_id");--> statement-breakpoint
CREATE INDEX "outbox_due" ON "outbox" USING btree ("next_at") WHERE state in ('pending','sending');--> statement-breakpoint
CREATE INDEX "outbox_dead" ON "outbox" USING btree ("created_at") WHERE state = 'dead';--> statement-breakpoint
CREATE INDEX "raw_by_time" ON "raw_mail" USING btree ("received_at");--> statement-breakpoint
CREATE UNIQUE INDEX "raw_once" ON "raw_mail" USING btree ("sha256","envelope_from",envelope_to);--> statement-breakpoint
CREATE UNIQUE INDEX "fee_once" ON "fee_notice" USING btree ("rma_line_id","kind");--> statement-breakpoint
CREATE UNIQUE INDEX "rma_line_one_open" ON "rma_line" USING btree ("unit_id") WHERE state in ('open','received','tested');--> statement-breakpoint
CREATE INDEX "line_of_rma" ON "rma_line" USING btree ("rma_id");--> statement-breakpoint
CREATE UNIQUE INDEX "rma_number_once" ON "rma" USING btree ("number");--> statement-breakpoint
CREATE INDEX "rma_of_ticket" ON "rma" USING btree ("ticket_id");--> statement-breakpoint
CREATE INDEX "rma_of_account" ON "rma" USING btree ("account_id","created_at");--> statement-breakpoint
CREATE INDEX "rma_by_state" ON "rma" USING btree ("state","expires_on");--> statement-breakpoint
CREATE UNIQUE INDEX "entry_reference_once" ON "entry" USING btree ("ticket_id","letter","number");--> statement-breakpoint
CREATE UNIQUE INDEX "entry_order_once" ON "entry" USING btree ("ticket_id","seq");--> statement-breakpoint
CREATE UNIQUE INDEX "participant_once" ON "ticket_participant" USING btree ("ticket_id","email");--> statement-breakpoint
CREATE UNIQUE INDEX "ticket_unit_once" ON "ticket_unit" USING btree ("ticket_id","unit_id");--> statement-breakpoint
CREATE INDEX "ticket_unit_of_unit" ON "ticket_unit" USING btree ("unit_id");--> statement-breakpoint
CREATE INDEX "ticket_unit_of_system" ON "ticket_unit" USING btree ("system_unit_id");--> statement-breakpoint
CREATE UNIQUE INDEX "ticket_number_once" ON "ticket" USING btree ("number");--> statement-breakpoint
CREATE INDEX "ticket_queue" ON "ticket" USING btree ("waiting_on","due_at","id") WHERE closed_at is null;--> statement-breakpoint
CREATE INDEX "ticket_of_account" ON "ticket" USING btree ("account_id","last_entry_at");--> statement-breakpoint
CREATE INDEX "ticket_of_email" ON "ticket" USING btree ("person_email");--> statement-breakpoint
CREATE INDEX "ticket_by_entry" ON "ticket" USING btree ("last_entry_at","id");