CREATE TYPE "public"."extract_purpose" AS ENUM('interim', 'database-lock');--> statement-breakpoint
CREATE TYPE "public"."extract_standing" AS ENUM('look', 're-cut', 'unscheduled', 'decision-point');--> statement-breakpoint
CREATE TYPE "public"."extract_state" AS ENUM('awaiting-mapping', 'refused', 'sealed', 'awaiting-reason', 'judging', 'checked', 'withdrawn');--> statement-breakpoint
CREATE TYPE "public"."exposure_way" AS ENUM('allocation', 'arm-level-view', 'disclosure');--> statement-breakpoint
CREATE TYPE "public"."study_role" AS ENUM('biostatistician', 'data-manager', 'investigator', 'monitor');--> statement-breakpoint
CREATE TYPE "public"."installation_role" AS ENUM('administrator');--> statement-breakpoint
CREATE TYPE "public"."plan_state" AS ENUM('draft', 'awaiting-reviewer', 'signed', 'superseded');--> statement-breakpoint
CREATE TYPE "public"."session_end" AS ENUM('signed-out', 'ended-by-person', 'idle', 'too-old', 'deactivated', 'password-changed');--> statement-breakpoint
CREATE TABLE "blob" (
	"id" uuid PRIMARY KEY NOT NULL,
	"sealed" boolean NOT NULL,
	"pending" boolean DEFAULT true NOT NULL,
	"size" bigint NOT NULL,
	"hash" text NOT NULL,
	"chunks" integer NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "blob_chunk" (
	"blob_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "blob_chunk_blob_id_number_pk" PRIMARY KEY("blob_id","number")
);
--> statement-breakpoint
CREATE TABLE "check" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"extract_id" uuid NOT NULL,
	"plan_id" uuid NOT NULL,
	"allocation_id" uuid,
	"run" integer NOT NULL,
	"engine" text NOT NULL,
	"report_bytes" "bytea" NOT NULL,
	"report_hash" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "check_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "check_extract_id_run_unique" UNIQUE("extract_id","run")
);
--> statement-breakpoint
CREATE TABLE "release" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"extract_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"analyses" jsonb NOT NULL,
	"signature_id" uuid,
	"released_by" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "release_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "study_event" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"extract_id" uuid,
	"reason" text,
	"signature_id" uuid NOT NULL,
	"signed_by" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "study_event_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "acknowledgement" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"deviation_id" uuid NOT NULL,
	"decision" text NOT NULL,
	"comment" text,
	"person_id" uuid NOT NULL,
	"signature_id" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "acknowledgement_deviation_id_unique" UNIQUE("deviation_id")
);
--> statement-breakpoint
CREATE TABLE "deviation" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"analysis" text NOT NULL,
	"plan_id" uuid NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"due_at" timestamp (3) with time zone NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "deviation_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "deviation_study_id_number_unique" UNIQUE("study_id","number"),
	CONSTRAINT "deviation_study_id_analysis_unique" UNIQUE("study_id","analysis")
);
--> statement-breakpoint
CREATE TABLE "deviation_entry" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"deviation_id" uuid NOT NULL,
	"extract_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"verdict" jsonb NOT NULL,
	"released_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "deviation_entry_deviation_id_check_id_unique" UNIQUE("deviation_id","check_id")
);
--> statement-breakpoint
CREATE TABLE "memo" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"deviation_id" uuid NOT NULL,
	"settlement_id" uuid NOT NULL,
	"edition" text NOT NULL,
	"deviation_class" text NOT NULL,
	"binding" boolean NOT NULL,
	"state" text NOT NULL,
	"content" "bytea" NOT NULL,
	"content_hash" text NOT NULL,
	"signature_id" uuid,
	"pdf_blob_id" uuid,
	"pdf_hash" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"issued_at" timestamp (3) with time zone,
	CONSTRAINT "memo_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "memo_study_id_number_unique" UNIQUE("study_id","number"),
	CONSTRAINT "memo_settlement_id_unique" UNIQUE("settlement_id")
);
--> statement-breakpoint
CREATE TABLE "settlement" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"deviation_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"note" text NOT NULL,
	"settled_by" uuid NOT NULL,
	"signature_id" uuid NOT NULL,
	"second_by" uuid,
	"second_signature_id" uuid,
	"second_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "settlement_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "allocation" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"state" text NOT NULL,
	"blob_id" uuid NOT NULL,
	"hash" text NOT NULL,
	"commitment" text NOT NULL,
	"subjects" integer NOT NULL,
	"findings" jsonb NOT NULL,
	"uploaded_by" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "allocation_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "data_query" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"extract_id" uuid NOT NULL,
	"screen" text NOT NULL,
	"endpoint" text NOT NULL,
	"rows" jsonb NOT NULL,
	"count" integer NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"note" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"resolved_at" timestamp (3) with time zone,
	CONSTRAINT "data_query_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "data_query_study_id_number_unique" UNIQUE("study_id","number"),
	CONSTRAINT "data_query_extract_id_screen_endpoint_unique" UNIQUE("extract_id","screen","endpoint")
);
--> statement-breakpoint
CREATE TABLE "extract" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"plan_id" uuid NOT NULL,
	"state" "extract_state" NOT NULL,
	"file_name" text NOT NULL,
	"cut_off" date NOT NULL,
	"purpose" "extract_purpose" NOT NULL,
	"standing" "extract_standing",
	"look" text,
	"blob_id" uuid NOT NULL,
	"columns_blob_id" uuid,
	"bytes_hash" text NOT NULL,
	"content_hash" text,
	"size" bigint NOT NULL,
	"rows" integer,
	"subjects" integer,
	"columns" jsonb NOT NULL,
	"preview" jsonb,
	"mapping" jsonb,
	"findings" jsonb NOT NULL,
	"finding_counts" jsonb NOT NULL,
	"uploaded_by" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "extract_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "extract_study_id_number_unique" UNIQUE("study_id","number")
);
--> statement-breakpoint
CREATE TABLE "study_mapping" (
	"study_id" uuid PRIMARY KEY NOT NULL,
	"mapping" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mail_message" (
	"id" uuid PRIMARY KEY NOT NULL,
	"recipient" text NOT NULL,
	"sender" text NOT NULL,
	"subject" text NOT NULL,
	"body" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "clearance" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"reason" text NOT NULL,
	"proposed_by" uuid NOT NULL,
	"proposed_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"granted_by" uuid,
	"granted_at" timestamp (3) with time zone,
	"ended_by" uuid,
	"ended_at" timestamp (3) with time zone,
	"end_reason" text,
	CONSTRAINT "clearance_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "exposure" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"how" "exposure_way" NOT NULL,
	"subject" text NOT NULL,
	"since" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "exposure_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "exposure_once_per_way" UNIQUE("study_id","person_id","how")
);
--> statement-breakpoint
CREATE TABLE "study_member" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"role" "study_role" NOT NULL,
	"reason" text NOT NULL,
	"granted_by" uuid NOT NULL,
	"from" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"ended_by" uuid,
	"end_reason" text,
	"until" timestamp (3) with time zone,
	CONSTRAINT "study_member_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "invitation" (
	"id" uuid PRIMARY KEY NOT NULL,
	"person_id" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"used_at" timestamp (3) with time zone,
	"voided_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "person" (
	"id" uuid PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"email" text NOT NULL,
	"password_hash" text,
	"installation_role" "installation_role",
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"deactivated_at" timestamp (3) with time zone,
	CONSTRAINT "person_email_unique" UNIQUE("email"),
	CONSTRAINT "person_email_lower_case" CHECK ("person"."email" = lower("person"."email"))
);
--> statement-breakpoint
CREATE TABLE "plan" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"state" "plan_state" DEFAULT 'draft' NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"document" jsonb NOT NULL,
	"bytes" "bytea",
	"hash" text,
	"amends_id" uuid,
	"amendment_reason" text,
	"contributors" jsonb NOT NULL,
	"author_id" uuid NOT NULL,
	"declaration" jsonb,
	"knowledge" jsonb,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"signed_at" timestamp (3) with time zone,
	CONSTRAINT "plan_study_id_id_unique" UNIQUE("study_id","id"),
	CONSTRAINT "plan_study_id_version_unique" UNIQUE("study_id","version")
);
--> statement-breakpoint
CREATE TABLE "chain_head" (
	"chain" text PRIMARY KEY NOT NULL,
	"seq" bigint NOT NULL,
	"hash" text NOT NULL,
	"time" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "record_entry" (
	"chain" text NOT NULL,
	"seq" bigint NOT NULL,
	"format" text NOT NULL,
	"time" timestamp (3) with time zone NOT NULL,
	"clock_step_back" boolean NOT NULL,
	"actor" jsonb NOT NULL,
	"request_id" text,
	"origin" text,
	"action" text NOT NULL,
	"subject" text NOT NULL,
	"detail_hash" text NOT NULL,
	"previous_hash" text NOT NULL,
	"hash" text NOT NULL,
	"detail" jsonb NOT NULL,
	CONSTRAINT "record_entry_chain_seq_pk" PRIMARY KEY("chain","seq")
) PARTITION BY HASH ("chain");
--> statement-breakpoint
CREATE TABLE "signature" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"name" text NOT NULL,
	"role" text NOT NULL,
	"meaning" text NOT NULL,
	"subject" uuid NOT NULL,
	"hash" text NOT NULL,
	"reason" text,
	"request_id" text NOT NULL,
	"signed_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "signature_study_id_id_unique" UNIQUE("study_id","id")
);
--> statement-breakpoint
CREATE TABLE "attempt_count" (
	"key" varchar(255) PRIMARY KEY NOT NULL,
	"points" integer DEFAULT 0 NOT NULL,
	"expire" bigint
);
--> statement-breakpoint
CREATE TABLE "sign_in_session" (
	"id" uuid PRIMARY KEY NOT NULL,
	"person_id" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"last_seen_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"factor" text NOT NULL,
	"origin" text NOT NULL,
	"ended_at" timestamp (3) with time zone,
	"ended_why" "session_end"
);
--> statement-breakpoint
CREATE TABLE "study" (
	"id" uuid PRIMARY KEY NOT NULL,
	"protocol_number" text NOT NULL,
	"title" text NOT NULL,
	"phase" text NOT NULL,
	"sponsor" text NOT NULL,
	"demo" boolean DEFAULT false NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"blinded" boolean DEFAULT true NOT NULL,
	"blind_broken_at" timestamp (3) with time zone,
	CONSTRAINT "study_protocol_number_unique" UNIQUE("protocol_number")
);
--> statement-breakpoint
ALTER TABLE "check" ADD CONSTRAINT "check_study_id_extract_id_extract_study_id_id_fk" FOREIGN KEY ("study_id","extract_id") REFERENCES "public"."extract"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check" ADD CONSTRAINT "check_study_id_plan_id_plan_study_id_id_fk" FOREIGN KEY ("study_id","plan_id") REFERENCES "public"."plan"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check" ADD CONSTRAINT "check_study_id_allocation_id_allocation_study_id_id_fk" FOREIGN KEY ("study_id","allocation_id") REFERENCES "public"."allocation"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "release" ADD CONSTRAINT "release_released_by_person_id_fk" FOREIGN KEY ("released_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "release" ADD CONSTRAINT "release_study_id_check_id_check_study_id_id_fk" FOREIGN KEY ("study_id","check_id") REFERENCES "public"."check"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_event" ADD CONSTRAINT "study_event_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_event" ADD CONSTRAINT "study_event_signed_by_person_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_event" ADD CONSTRAINT "study_event_study_id_extract_id_extract_study_id_id_fk" FOREIGN KEY ("study_id","extract_id") REFERENCES "public"."extract"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "acknowledgement" ADD CONSTRAINT "acknowledgement_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "acknowledgement" ADD CONSTRAINT "acknowledgement_study_id_deviation_id_deviation_study_id_id_fk" FOREIGN KEY ("study_id","deviation_id") REFERENCES "public"."deviation"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation" ADD CONSTRAINT "deviation_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation" ADD CONSTRAINT "deviation_study_id_plan_id_plan_study_id_id_fk" FOREIGN KEY ("study_id","plan_id") REFERENCES "public"."plan"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation_entry" ADD CONSTRAINT "deviation_entry_study_id_deviation_id_deviation_study_id_id_fk" FOREIGN KEY ("study_id","deviation_id") REFERENCES "public"."deviation"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation_entry" ADD CONSTRAINT "deviation_entry_study_id_check_id_check_study_id_id_fk" FOREIGN KEY ("study_id","check_id") REFERENCES "public"."check"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memo" ADD CONSTRAINT "memo_study_id_deviation_id_deviation_study_id_id_fk" FOREIGN KEY ("study_id","deviation_id") REFERENCES "public"."deviation"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memo" ADD CONSTRAINT "memo_study_id_settlement_id_settlement_study_id_id_fk" FOREIGN KEY ("study_id","settlement_id") REFERENCES "public"."settlement"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "settlement" ADD CONSTRAINT "settlement_settled_by_person_id_fk" FOREIGN KEY ("settled_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "settlement" ADD CONSTRAINT "settlement_second_by_person_id_fk" FOREIGN KEY ("second_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "settlement" ADD CONSTRAINT "settlement_study_id_deviation_id_deviation_study_id_id_fk" FOREIGN KEY ("study_id","deviation_id") REFERENCES "public"."deviation"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "allocation" ADD CONSTRAINT "allocation_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "allocation" ADD CONSTRAINT "allocation_uploaded_by_person_id_fk" FOREIGN KEY ("uploaded_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "data_query" ADD CONSTRAINT "data_query_study_id_extract_id_extract_study_id_id_fk" FOREIGN KEY ("study_id","extract_id") REFERENCES "public"."extract"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extract" ADD CONSTRAINT "extract_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extract" ADD CONSTRAINT "extract_uploaded_by_person_id_fk" FOREIGN KEY ("uploaded_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extract" ADD CONSTRAINT "extract_study_id_plan_id_plan_study_id_id_fk" FOREIGN KEY ("study_id","plan_id") REFERENCES "public"."plan"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_mapping" ADD CONSTRAINT "study_mapping_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clearance" ADD CONSTRAINT "clearance_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clearance" ADD CONSTRAINT "clearance_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clearance" ADD CONSTRAINT "clearance_proposed_by_person_id_fk" FOREIGN KEY ("proposed_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clearance" ADD CONSTRAINT "clearance_granted_by_person_id_fk" FOREIGN KEY ("granted_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clearance" ADD CONSTRAINT "clearance_ended_by_person_id_fk" FOREIGN KEY ("ended_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "exposure" ADD CONSTRAINT "exposure_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "exposure" ADD CONSTRAINT "exposure_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_member" ADD CONSTRAINT "study_member_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_member" ADD CONSTRAINT "study_member_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_member" ADD CONSTRAINT "study_member_granted_by_person_id_fk" FOREIGN KEY ("granted_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_member" ADD CONSTRAINT "study_member_ended_by_person_id_fk" FOREIGN KEY ("ended_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plan" ADD CONSTRAINT "plan_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plan" ADD CONSTRAINT "plan_author_id_person_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plan" ADD CONSTRAINT "plan_study_id_amends_id_plan_study_id_id_fk" FOREIGN KEY ("study_id","amends_id") REFERENCES "public"."plan"("study_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signature" ADD CONSTRAINT "signature_study_id_study_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."study"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signature" ADD CONSTRAINT "signature_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sign_in_session" ADD CONSTRAINT "sign_in_session_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "blob_pending_created_at_index" ON "blob" USING btree ("pending","created_at");--> statement-breakpoint
CREATE INDEX "release_study_id_extract_id_index" ON "release" USING btree ("study_id","extract_id");--> statement-breakpoint
CREATE INDEX "data_query_study_id_state_index" ON "data_query" USING btree ("study_id","state");--> statement-breakpoint
CREATE INDEX "mail_message_recipient_created_at_index" ON "mail_message" USING btree ("recipient","created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "clearance_one_open" ON "clearance" USING btree ("study_id","person_id") WHERE "clearance"."ended_at" is null;--> statement-breakpoint
CREATE UNIQUE INDEX "study_member_one_role" ON "study_member" USING btree ("study_id","person_id","role") WHERE "study_member"."until" is null;--> statement-breakpoint
CREATE INDEX "sign_in_session_person_id_index" ON "sign_in_session" USING btree ("person_id");