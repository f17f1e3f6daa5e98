CREATE TABLE "parcel_history" (
	"district_id" uuid NOT NULL,
	"history_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"parcel_code" text NOT NULL,
	"change" text NOT NULL,
	"successors" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"valid_to" date,
	"geometry_version" integer NOT NULL,
	"row" jsonb NOT NULL,
	"import_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "parcel_history_district_id_history_id_pk" PRIMARY KEY("district_id","history_id")
);
--> statement-breakpoint
CREATE TABLE "service_area" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"reach_code" text,
	"turnout_code" text,
	"area_m2" double precision NOT NULL,
	"west" double precision NOT NULL,
	"south" double precision NOT NULL,
	"east" double precision NOT NULL,
	"north" double precision NOT NULL,
	"geometry" jsonb NOT NULL,
	"attributes" jsonb DEFAULT '{}'::jsonb NOT NULL,
	CONSTRAINT "service_area_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "soil_area" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"soil_code" text NOT NULL,
	"west" double precision NOT NULL,
	"south" double precision NOT NULL,
	"east" double precision NOT NULL,
	"north" double precision NOT NULL,
	"geometry" jsonb NOT NULL,
	"attributes" jsonb DEFAULT '{}'::jsonb NOT NULL,
	CONSTRAINT "soil_area_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "feed_fetch" (
	"district_id" uuid NOT NULL,
	"fetch_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"feed_id" uuid NOT NULL,
	"address" text NOT NULL,
	"at" timestamp with time zone DEFAULT now() NOT NULL,
	"outcome" text NOT NULL,
	"status" integer,
	"size_bytes" bigint,
	"sha256" text,
	"etag" text,
	"last_modified" text,
	"import_id" uuid,
	"error" text,
	CONSTRAINT "feed_fetch_district_id_fetch_id_pk" PRIMARY KEY("district_id","fetch_id")
);
--> statement-breakpoint
CREATE TABLE "interpolation_check" (
	"district_id" uuid NOT NULL,
	"key" text NOT NULL,
	"from_day" date NOT NULL,
	"to_day" date NOT NULL,
	"input_sha256" text NOT NULL,
	"computed_at" timestamp with time zone DEFAULT now() NOT NULL,
	"result" jsonb NOT NULL,
	CONSTRAINT "interpolation_check_district_id_key_from_day_to_day_pk" PRIMARY KEY("district_id","key","from_day","to_day")
);
--> statement-breakpoint
CREATE TABLE "weather_check" (
	"district_id" uuid NOT NULL,
	"source_id" integer NOT NULL,
	"checked_at" timestamp with time zone DEFAULT now() NOT NULL,
	"summary" jsonb NOT NULL,
	CONSTRAINT "weather_check_district_id_source_id_pk" PRIMARY KEY("district_id","source_id")
);
--> statement-breakpoint
CREATE TABLE "weather_correction" (
	"district_id" uuid NOT NULL,
	"correction_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"sequence" bigint NOT NULL,
	"source_id" integer NOT NULL,
	"ordinal" integer NOT NULL,
	"variable" text NOT NULL,
	"from_day" date NOT NULL,
	"to_day" date NOT NULL,
	"act" text NOT NULL,
	"amount" double precision,
	"values" jsonb,
	"rule" text,
	"reason" text NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"undone_by" text,
	"undone_at" timestamp with time zone,
	CONSTRAINT "weather_correction_district_id_correction_id_pk" PRIMARY KEY("district_id","correction_id")
);
--> statement-breakpoint
CREATE TABLE "weather_feed" (
	"district_id" uuid NOT NULL,
	"feed_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"kind" text DEFAULT 'weather' NOT NULL,
	"from_kind" text NOT NULL,
	"template" text NOT NULL,
	"options" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"schedule" text NOT NULL,
	"look_back_days" integer DEFAULT 3 NOT NULL,
	"enabled" boolean DEFAULT true NOT NULL,
	"apply_automatically" boolean DEFAULT true NOT NULL,
	"next_at" timestamp with time zone,
	"failures" integer DEFAULT 0 NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "weather_feed_district_id_feed_id_pk" PRIMARY KEY("district_id","feed_id"),
	CONSTRAINT "weather_feed_name" UNIQUE("district_id","name")
);
--> statement-breakpoint
CREATE TABLE "weather_flag" (
	"district_id" uuid NOT NULL,
	"source_id" integer NOT NULL,
	"ordinal" integer NOT NULL,
	"variable" text NOT NULL,
	"rule" text NOT NULL,
	"first_day" date NOT NULL,
	"last_day" date NOT NULL,
	"severity" text NOT NULL,
	"value" double precision,
	"limit_value" double precision,
	"detail" text NOT NULL,
	"figures" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"correction_id" uuid,
	CONSTRAINT "weather_flag_district_id_source_id_ordinal_variable_rule_first_day_pk" PRIMARY KEY("district_id","source_id","ordinal","variable","rule","first_day")
);
--> statement-breakpoint
ALTER TABLE "parcel" ADD COLUMN "soil_shares" jsonb;--> statement-breakpoint
ALTER TABLE "turnout" ADD COLUMN "longitude" double precision;--> statement-breakpoint
ALTER TABLE "turnout" ADD COLUMN "latitude" double precision;--> statement-breakpoint
ALTER TABLE "run" ADD COLUMN "stale_since" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "run" ADD COLUMN "stale_reason" text;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "grid_row" integer;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "grid_column" integer;--> statement-breakpoint
ALTER TABLE "weather_block" ADD COLUMN "steps" smallint DEFAULT 1 NOT NULL;--> statement-breakpoint
ALTER TABLE "weather_source" ADD COLUMN "grid" jsonb;--> statement-breakpoint
ALTER TABLE "weather_source" ADD COLUMN "rank" integer DEFAULT 1 NOT NULL;--> statement-breakpoint
ALTER TABLE "parcel_history" ADD CONSTRAINT "parcel_history_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "service_area" ADD CONSTRAINT "service_area_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soil_area" ADD CONSTRAINT "soil_area_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "feed_fetch" ADD CONSTRAINT "feed_fetch_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "interpolation_check" ADD CONSTRAINT "interpolation_check_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_check" ADD CONSTRAINT "weather_check_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_correction" ADD CONSTRAINT "weather_correction_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_feed" ADD CONSTRAINT "weather_feed_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_flag" ADD CONSTRAINT "weather_flag_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "parcel_history_code" ON "parcel_history" USING btree ("district_id","parcel_code");--> statement-breakpoint
CREATE INDEX "soil_area_box" ON "soil_area" USING btree ("district_id","west","east","south","north");--> statement-breakpoint
CREATE INDEX "feed_fetch_feed" ON "feed_fetch" USING btree ("district_id","feed_id","at");--> statement-breakpoint
CREATE INDEX "weather_correction_site" ON "weather_correction" USING btree ("district_id","source_id","ordinal");--> statement-breakpoint
CREATE INDEX "weather_flag_state" ON "weather_flag" USING btree ("district_id","state");