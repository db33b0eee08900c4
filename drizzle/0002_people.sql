CREATE TYPE "public"."granted_role" AS ENUM('coauthor', 'referee', 'reader');--> statement-breakpoint
CREATE TYPE "public"."mail_state" AS ENUM('waiting', 'sent', 'failed');--> statement-breakpoint
CREATE TYPE "public"."notice_kind" AS ENUM('invitation', 'variants', 'remark', 'mention', 'verdict', 'job');--> statement-breakpoint
CREATE TYPE "public"."mail_mode" AS ENUM('immediate', 'daily', 'off');--> statement-breakpoint
CREATE TYPE "public"."scope" AS ENUM('read', 'write', 'publish');--> statement-breakpoint
CREATE TABLE "invitations" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"notebook" uuid NOT NULL,
	"email" text NOT NULL,
	"role" "granted_role" NOT NULL,
	"hash" text NOT NULL,
	"invited_by" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"ended_at" timestamp (3) with time zone,
	CONSTRAINT "invitations_hash_unique" UNIQUE("hash")
);
--> statement-breakpoint
CREATE TABLE "limits" (
	"name" text PRIMARY KEY NOT NULL,
	"value" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mails" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"to" text NOT NULL,
	"subject" text NOT NULL,
	"text" text,
	"stops" json,
	"state" "mail_state" DEFAULT 'waiting' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"error" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"due_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"useless_at" timestamp (3) with time zone,
	"sent_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "notice_settings" (
	"person" uuid NOT NULL,
	"notebook" uuid NOT NULL,
	"mail" "mail_mode" NOT NULL,
	CONSTRAINT "notice_settings_person_notebook_pk" PRIMARY KEY("person","notebook")
);
--> statement-breakpoint
CREATE TABLE "notices" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person" uuid NOT NULL,
	"kind" "notice_kind" NOT NULL,
	"text" text NOT NULL,
	"actor" uuid,
	"notebook" uuid,
	"to" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"read_at" timestamp (3) with time zone,
	"digest" boolean DEFAULT false NOT NULL
);
--> statement-breakpoint
CREATE TABLE "access_tokens" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person" uuid NOT NULL,
	"name" text NOT NULL,
	"scopes" "scope"[] NOT NULL,
	"hash" text NOT NULL,
	"begins" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone,
	"used_at" timestamp (3) with time zone,
	"revoked_at" timestamp (3) with time zone,
	CONSTRAINT "access_tokens_hash_unique" UNIQUE("hash")
);
--> statement-breakpoint
CREATE TABLE "mail_links" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"hash" text NOT NULL,
	"email" text NOT NULL,
	"person" uuid,
	"to" text DEFAULT '/' NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"used_at" timestamp (3) with time zone,
	CONSTRAINT "mail_links_hash_unique" UNIQUE("hash")
);
--> statement-breakpoint
ALTER TABLE "identities" ADD COLUMN "id" uuid DEFAULT gen_random_uuid() NOT NULL;--> statement-breakpoint
ALTER TABLE "identities" ADD COLUMN "label" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "people" ADD COLUMN "affiliation" text;--> statement-breakpoint
ALTER TABLE "people" ADD COLUMN "orcid" text;--> statement-breakpoint
ALTER TABLE "people" ADD COLUMN "notice_mail" "mail_mode" DEFAULT 'immediate' NOT NULL;--> statement-breakpoint
ALTER TABLE "people" ADD COLUMN "suspended_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "people" ADD COLUMN "deleted_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_invited_by_people_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notice_settings" ADD CONSTRAINT "notice_settings_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notice_settings" ADD CONSTRAINT "notice_settings_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_actor_people_id_fk" FOREIGN KEY ("actor") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "access_tokens" ADD CONSTRAINT "access_tokens_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "mail_links" ADD CONSTRAINT "mail_links_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "invitations_address" ON "invitations" USING btree ("notebook","email") WHERE "invitations"."ended_at" is null;--> statement-breakpoint
CREATE INDEX "invitations_email" ON "invitations" USING btree ("email");--> statement-breakpoint
CREATE INDEX "invitations_by" ON "invitations" USING btree ("invited_by","created_at");--> statement-breakpoint
CREATE INDEX "mails_due" ON "mails" USING btree ("due_at") WHERE "mails"."state" = 'waiting';--> statement-breakpoint
CREATE INDEX "mails_created" ON "mails" USING btree ("created_at","id");--> statement-breakpoint
CREATE INDEX "notices_person" ON "notices" USING btree ("person","created_at","id");--> statement-breakpoint
CREATE INDEX "notices_unread" ON "notices" USING btree ("person") WHERE "notices"."read_at" is null;--> statement-breakpoint
CREATE INDEX "notices_digest" ON "notices" USING btree ("person") WHERE "notices"."digest";--> statement-breakpoint
CREATE INDEX "access_tokens_person" ON "access_tokens" USING btree ("person");--> statement-breakpoint
CREATE INDEX "mail_links_email" ON "mail_links" USING btree ("email","created_at");--> statement-breakpoint
ALTER TABLE "identities" ADD CONSTRAINT "identities_id_unique" UNIQUE("id");