CREATE TYPE "public"."question_state" AS ENUM('waiting', 'working', 'done', 'failed', 'cancelled');--> statement-breakpoint
CREATE TABLE "jobs" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person" uuid NOT NULL,
	"notebook" uuid,
	"question" text NOT NULL,
	"asked_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"cancelled_at" timestamp (3) with time zone,
	CONSTRAINT "jobs_question" UNIQUE("question","person")
);
--> statement-breakpoint
CREATE TABLE "questions" (
	"name" text PRIMARY KEY NOT NULL,
	"engine" text NOT NULL,
	"source" text,
	"audit" text NOT NULL,
	"text" text NOT NULL,
	"size" text NOT NULL,
	"operations" double precision NOT NULL,
	"bytes" double precision NOT NULL,
	"cost" text NOT NULL,
	"state" "question_state" DEFAULT 'waiting' NOT NULL,
	"done" double precision DEFAULT 0 NOT NULL,
	"doing" text DEFAULT '' NOT NULL,
	"begun_at" timestamp (3) with time zone,
	"begun_done" double precision DEFAULT 0 NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"checkpoint" json,
	"findings" json,
	"reason" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"ended_at" timestamp (3) with time zone
);
--> statement-breakpoint
ALTER TABLE "jobs" ADD CONSTRAINT "jobs_person_people_id_fk" FOREIGN KEY ("person") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "jobs" ADD CONSTRAINT "jobs_notebook_notebooks_id_fk" FOREIGN KEY ("notebook") REFERENCES "public"."notebooks"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "jobs" ADD CONSTRAINT "jobs_question_questions_name_fk" FOREIGN KEY ("question") REFERENCES "public"."questions"("name") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "jobs_person" ON "jobs" USING btree ("person","asked_at","id");--> statement-breakpoint
CREATE INDEX "jobs_notebook" ON "jobs" USING btree ("notebook");--> statement-breakpoint
CREATE INDEX "questions_state" ON "questions" USING btree ("state");