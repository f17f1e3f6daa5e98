CREATE TABLE "auth"."setup_token" (
	"hash" text PRIMARY KEY NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
ALTER TABLE "auth"."rate_limit" ADD CONSTRAINT "rate_limit_key_unique" UNIQUE("key");