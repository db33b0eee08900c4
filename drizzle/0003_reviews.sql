CREATE TYPE "public"."decision" AS ENUM('adopted', 'left');--> statement-breakpoint
CREATE TYPE "public"."evaluation_status" AS ENUM('computing', 'done', 'failed');--> statement-breakpoint
CREATE TYPE "public"."variant_kind" AS ENUM('changed', 'added', 'removed', 'title');--> statement-breakpoint
CREATE TYPE "public"."verdict_word" AS ENUM('stands', 'fails', 'unsure');--> statement-breakpoint
CREATE TABLE "evaluation_waits" (
	"evaluation" uuid NOT NULL,
	"notebook" uuid NOT NULL,
	CONSTRAINT "evaluation_waits_evaluation_notebook_pk" PRIMARY KEY("evaluation","notebook")
);
--> statement-breakpoint
CREATE TABLE "evaluations" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"key" text NOT NULL,
	"engine" text NOT NULL,
	"text" text NOT NULL,
	"status" "evaluation_status" DEFAULT 'computing' NOT NULL,
	"reason" text,
	"attempts" integer DEFAULT 0 NOT NULL,
	"report" json,
	"asked_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"used_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "evaluations_key" UNIQUE("key","engine")
);
--> statement-breakpoint
CREATE TABLE "fork_bases" (
	"notebook" uuid PRIMARY KEY NOT NULL,
	"base" json NOT NULL
);
--> statement-breakpoint
CREATE TABLE "remarks" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"notebook" uuid NOT NULL,
	"parent" uuid,
	"by" uuid,
	"text" text,
	"mentions" uuid[] DEFAULT '{}' NOT NULL,
	"subject" json,
	"entry" uuid,
	"made_on" integer,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"edited_at" timestamp (3) with time zone,
	"settled_by" uuid,
	"settled_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "reruns" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"edition" uuid NOT NULL,
	"claim" uuid,
	"variation" json NOT NULL,
	"evaluation" uuid NOT NULL,
	"by" uuid,
	"asked_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sendings" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"origin" uuid NOT NULL,
	"fork" uuid,
	"edition" integer,
	"letter" text NOT NULL,
	"sent_by" uuid,
	"sent_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"withdrawn_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "variants" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sending" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"kind" "variant_kind" NOT NULL,
	"entry_kind" "entry_kind" NOT NULL,
	"entry" uuid,
	"after" uuid,
	"base" text,
	"fork" text,
	"decision" "decision",
	"reason" text,
	"decided_by" uuid,
	"decided_at" timestamp (3) with time zone,
	"displaced" text,
	"adopted" text,
	CONSTRAINT "variants_ordinal" UNIQUE("sending","ordinal")
);
--> statement-breakpoint
CREATE TABLE "verdicts" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"edition" uuid NOT NULL,
	"claim" uuid,
	"by" uuid,
	"word" "verdict_word" NOT NULL,
	"reason" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"changed_at" timestamp (3) with time zone
);
--> statement-breakpoint
ALTER TABLE "entries" ADD COLUMN "words" "tsvector" GENERATED ALWAYS AS (to_tsvector('simple', translate(left("entries"."text", 100000), '^[](){}<>|.,:;/\+-*=&!?@#$%~"`_', '                               '))) STORED;--> statement-breakpoint
ALTER TABLE "memberships" ADD COLUMN "archived_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "notebooks" ADD COLUMN "deleted_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "evaluation_waits" ADD CONSTRAINT "evaluation_waits_evaluation_evaluations_id_fk" FOREIGN KEY ("evaluation") REFERENCES "public"."evaluations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "evaluation_waits" ADD CONSTRAINT "evaluation_waits_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fork_bases" ADD CONSTRAINT "fork_bases_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remarks" ADD CONSTRAINT "remarks_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remarks" ADD CONSTRAINT "remarks_parent_remarks_id_fk" FOREIGN KEY ("parent") REFERENCES "public"."remarks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remarks" ADD CONSTRAINT "remarks_by_people_id_fk" FOREIGN KEY ("by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remarks" ADD CONSTRAINT "remarks_settled_by_people_id_fk" FOREIGN KEY ("settled_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reruns" ADD CONSTRAINT "reruns_edition_editions_id_fk" FOREIGN KEY ("edition") REFERENCES "public"."editions"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reruns" ADD CONSTRAINT "reruns_claim_claims_id_fk" FOREIGN KEY ("claim") REFERENCES "public"."claims"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reruns" ADD CONSTRAINT "reruns_evaluation_evaluations_id_fk" FOREIGN KEY ("evaluation") REFERENCES "public"."evaluations"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reruns" ADD CONSTRAINT "reruns_by_people_id_fk" FOREIGN KEY ("by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sendings" ADD CONSTRAINT "sendings_origin_notebooks_id_fk" FOREIGN KEY ("origin") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sendings" ADD CONSTRAINT "sendings_fork_notebooks_id_fk" FOREIGN KEY ("fork") REFERENCES "public"."notebooks"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sendings" ADD CONSTRAINT "sendings_sent_by_people_id_fk" FOREIGN KEY ("sent_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "variants" ADD CONSTRAINT "variants_sending_sendings_id_fk" FOREIGN KEY ("sending") REFERENCES "public"."sendings"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "variants" ADD CONSTRAINT "variants_decided_by_people_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "verdicts" ADD CONSTRAINT "verdicts_edition_editions_id_fk" FOREIGN KEY ("edition") REFERENCES "public"."editions"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "verdicts" ADD CONSTRAINT "verdicts_claim_claims_id_fk" FOREIGN KEY ("claim") REFERENCES "public"."claims"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "verdicts" ADD CONSTRAINT "verdicts_by_people_id_fk" FOREIGN KEY ("by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "evaluations_waiting" ON "evaluations" USING btree ("asked_at") WHERE "evaluations"."status" = 'computing';--> statement-breakpoint
CREATE INDEX "remarks_notebook" ON "remarks" USING btree ("notebook","created_at");--> statement-breakpoint
CREATE INDEX "remarks_parent" ON "remarks" USING btree ("parent");--> statement-breakpoint
CREATE INDEX "reruns_edition" ON "reruns" USING btree ("edition","asked_at");--> statement-breakpoint
CREATE INDEX "reruns_evaluation" ON "reruns" USING btree ("evaluation");--> statement-breakpoint
CREATE INDEX "sendings_origin" ON "sendings" USING btree ("origin","sent_at","id");--> statement-breakpoint
CREATE INDEX "sendings_fork" ON "sendings" USING btree ("fork","sent_at","id");--> statement-breakpoint
CREATE UNIQUE INDEX "verdicts_claim" ON "verdicts" USING btree ("edition","claim","by") WHERE "verdicts"."claim" is not null;--> statement-breakpoint
CREATE UNIQUE INDEX "verdicts_whole" ON "verdicts" USING btree ("edition","by") WHERE "verdicts"."claim" is null;--> statement-breakpoint
CREATE INDEX "entries_words" ON "entries" USING gin ("words");--> statement-breakpoint
CREATE INDEX "notebooks_bin" ON "notebooks" USING btree ("deleted_at") WHERE "notebooks"."deleted_at" is not null;