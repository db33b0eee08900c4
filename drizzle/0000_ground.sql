CREATE TYPE "public"."entry_kind" AS ENUM('prose', 'statements');--> statement-breakpoint
CREATE TYPE "public"."role" AS ENUM('owner', 'coauthor', 'referee', 'reader');--> statement-breakpoint
CREATE TYPE "public"."visibility" AS ENUM('private', 'public');--> statement-breakpoint
CREATE TYPE "public"."edition_status" AS ENUM('computing', 'sealed', 'failed');--> statement-breakpoint
CREATE TYPE "public"."grade" AS ENUM('proved', 'exact', 'numerical', 'refuted', 'open');--> statement-breakpoint
CREATE TABLE "entries" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"notebook" uuid NOT NULL,
	"position" integer NOT NULL,
	"kind" "entry_kind" NOT NULL,
	"text" text NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	"changed_by" uuid,
	"changed_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"deleted_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "holds" (
	"entry" uuid PRIMARY KEY NOT NULL,
	"person" uuid NOT NULL,
	"until" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "memberships" (
	"notebook" uuid NOT NULL,
	"person" uuid NOT NULL,
	"role" "role" NOT NULL,
	"since" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "memberships_notebook_person_pk" PRIMARY KEY("notebook","person")
);
--> statement-breakpoint
CREATE TABLE "notebooks" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"title" text NOT NULL,
	"authors" text[] DEFAULT '{}' NOT NULL,
	"visibility" "visibility" DEFAULT 'private' NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"changed_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"origin_notebook" uuid,
	"origin_edition" integer
);
--> statement-breakpoint
CREATE TABLE "presences" (
	"connection" uuid PRIMARY KEY NOT NULL,
	"notebook" uuid NOT NULL,
	"person" uuid NOT NULL,
	"seen_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "identities" (
	"provider" text NOT NULL,
	"subject" text NOT NULL,
	"person" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "identities_provider_subject_pk" PRIMARY KEY("provider","subject")
);
--> statement-breakpoint
CREATE TABLE "people" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"handle" text NOT NULL,
	"name" text NOT NULL,
	"email" text,
	"steward" boolean DEFAULT false NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"sid" text PRIMARY KEY NOT NULL,
	"sess" json NOT NULL,
	"expire" timestamp (6) NOT NULL
);
--> statement-breakpoint
CREATE TABLE "claims" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"edition" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"line" integer NOT NULL,
	"audit" text NOT NULL,
	"subject" text NOT NULL,
	"statement" text NOT NULL,
	"tex" text NOT NULL,
	"grade" "grade" NOT NULL,
	"figures" json NOT NULL,
	"witness" json NOT NULL,
	"cautions" text[] NOT NULL,
	"sources" text[] NOT NULL,
	"entry" uuid,
	"entry_line" integer,
	CONSTRAINT "claims_ordinal" UNIQUE("edition","ordinal")
);
--> statement-breakpoint
CREATE TABLE "editions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"notebook" uuid NOT NULL,
	"number" integer NOT NULL,
	"summary" text NOT NULL,
	"content" json NOT NULL,
	"entry_ids" uuid[] NOT NULL,
	"hash" text NOT NULL,
	"published_by" uuid,
	"published_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"status" "edition_status" DEFAULT 'computing' NOT NULL,
	"reason" text,
	"attempts" integer DEFAULT 0 NOT NULL,
	"engine" text,
	"sealed_at" timestamp (3) with time zone,
	"report" json,
	CONSTRAINT "editions_number" UNIQUE("notebook","number")
);
--> statement-breakpoint
CREATE TABLE "links" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"edition" uuid NOT NULL,
	"token" text NOT NULL,
	"created_by" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"revoked_at" timestamp (3) with time zone,
	CONSTRAINT "links_token_unique" UNIQUE("token")
);
--> statement-breakpoint
ALTER TABLE "entries" ADD CONSTRAINT "entries_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entries" ADD CONSTRAINT "entries_changed_by_people_id_fk" FOREIGN KEY ("changed_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "holds" ADD CONSTRAINT "holds_entry_entries_id_fk" FOREIGN KEY ("entry") REFERENCES "public"."entries"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "holds" ADD CONSTRAINT "holds_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notebooks" ADD CONSTRAINT "notebooks_origin_notebook_notebooks_id_fk" FOREIGN KEY ("origin_notebook") REFERENCES "public"."notebooks"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "presences" ADD CONSTRAINT "presences_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "presences" ADD CONSTRAINT "presences_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "identities" ADD CONSTRAINT "identities_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "claims" ADD CONSTRAINT "claims_edition_editions_id_fk" FOREIGN KEY ("edition") REFERENCES "public"."editions"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "editions" ADD CONSTRAINT "editions_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "editions" ADD CONSTRAINT "editions_published_by_people_id_fk" FOREIGN KEY ("published_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "links" ADD CONSTRAINT "links_edition_editions_id_fk" FOREIGN KEY ("edition") REFERENCES "public"."editions"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "links" ADD CONSTRAINT "links_created_by_people_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "entries_notebook" ON "entries" USING btree ("notebook","position");--> statement-breakpoint
CREATE UNIQUE INDEX "memberships_one_owner" ON "memberships" USING btree ("notebook") WHERE "memberships"."role" = 'owner';--> statement-breakpoint
CREATE INDEX "memberships_person" ON "memberships" USING btree ("person");--> statement-breakpoint
CREATE INDEX "notebooks_public" ON "notebooks" USING btree ("changed_at","id") WHERE "notebooks"."visibility" = 'public';--> statement-breakpoint
CREATE INDEX "notebooks_origin" ON "notebooks" USING btree ("origin_notebook");--> statement-breakpoint
CREATE INDEX "presences_notebook" ON "presences" USING btree ("notebook");--> statement-breakpoint
CREATE INDEX "identities_person" ON "identities" USING btree ("person");--> statement-breakpoint
CREATE UNIQUE INDEX "people_handle" ON "people" USING btree (lower("handle"));--> statement-breakpoint
CREATE INDEX "sessions_expire" ON "sessions" USING btree ("expire");--> statement-breakpoint
CREATE INDEX "sessions_person" ON "sessions" USING btree ((("sess" -> 'passport' ->> 'user')));--> statement-breakpoint
CREATE INDEX "editions_status" ON "editions" USING btree ("status");--> statement-breakpoint
CREATE INDEX "links_edition" ON "links" USING btree ("edition");