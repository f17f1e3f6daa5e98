CREATE SCHEMA "auth";
--> statement-breakpoint
CREATE TABLE "auth"."account" (
	"id" text PRIMARY KEY NOT NULL,
	"account_id" text NOT NULL,
	"provider_id" text NOT NULL,
	"user_id" text NOT NULL,
	"access_token" text,
	"refresh_token" text,
	"id_token" text,
	"access_token_expires_at" timestamp with time zone,
	"refresh_token_expires_at" timestamp with time zone,
	"scope" text,
	"password" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "auth"."rate_limit" (
	"id" text PRIMARY KEY NOT NULL,
	"key" text NOT NULL,
	"count" integer NOT NULL,
	"last_request" bigint NOT NULL
);
--> statement-breakpoint
CREATE TABLE "auth"."session" (
	"id" text PRIMARY KEY NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"token" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	"ip_address" text,
	"user_agent" text,
	"user_id" text NOT NULL,
	CONSTRAINT "session_token_unique" UNIQUE("token")
);
--> statement-breakpoint
CREATE TABLE "auth"."user" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"email" text NOT NULL,
	"email_verified" boolean DEFAULT false NOT NULL,
	"image" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "user_email_unique" UNIQUE("email")
);
--> statement-breakpoint
CREATE TABLE "auth"."verification" (
	"id" text PRIMARY KEY NOT NULL,
	"identifier" text NOT NULL,
	"value" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "api_token" (
	"district_id" uuid NOT NULL,
	"token_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"prefix" text NOT NULL,
	"hash" text NOT NULL,
	"scope" text NOT NULL,
	"expires_at" timestamp with time zone,
	"last_used_at" timestamp with time zone,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "api_token_district_id_token_id_pk" PRIMARY KEY("district_id","token_id"),
	CONSTRAINT "api_token_hash" UNIQUE("hash")
);
--> statement-breakpoint
CREATE TABLE "district" (
	"district_id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"time_zone" text NOT NULL,
	"units" text DEFAULT 'metric' NOT NULL,
	"week_start" smallint DEFAULT 1 NOT NULL,
	"water_year_start_month" smallint DEFAULT 10 NOT NULL,
	"boundary" jsonb,
	"invented" boolean DEFAULT false NOT NULL,
	"default_elevation_m" double precision DEFAULT 0 NOT NULL,
	"radiation_coefficient" double precision DEFAULT 0.16 NOT NULL,
	"geometry_version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "district_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "grower_parcel" (
	"district_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"parcel_code" text NOT NULL,
	CONSTRAINT "grower_parcel_district_id_user_id_parcel_code_pk" PRIMARY KEY("district_id","user_id","parcel_code")
);
--> statement-breakpoint
CREATE TABLE "membership" (
	"district_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"role" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "membership_district_id_user_id_pk" PRIMARY KEY("district_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "import_before" (
	"district_id" uuid NOT NULL,
	"import_id" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"table_name" text NOT NULL,
	"key" jsonb NOT NULL,
	"before" jsonb,
	CONSTRAINT "import_before_district_id_import_id_ordinal_pk" PRIMARY KEY("district_id","import_id","ordinal")
);
--> statement-breakpoint
CREATE TABLE "import_file" (
	"district_id" uuid NOT NULL,
	"import_id" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"name" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"sha256" text NOT NULL,
	CONSTRAINT "import_file_district_id_import_id_ordinal_pk" PRIMARY KEY("district_id","import_id","ordinal")
);
--> statement-breakpoint
CREATE TABLE "import" (
	"district_id" uuid NOT NULL,
	"import_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"kind" text NOT NULL,
	"state" text DEFAULT 'reading' NOT NULL,
	"progress" real DEFAULT 0 NOT NULL,
	"options" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"understood" jsonb,
	"findings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"finding_counts" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"preview" jsonb,
	"error" text,
	"revision" integer DEFAULT 1 NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"applied_at" timestamp with time zone,
	"applied_order" bigint,
	"undone_at" timestamp with time zone,
	CONSTRAINT "import_district_id_import_id_pk" PRIMARY KEY("district_id","import_id")
);
--> statement-breakpoint
CREATE TABLE "import_staged" (
	"district_id" uuid NOT NULL,
	"import_id" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"payload" "bytea" NOT NULL,
	CONSTRAINT "import_staged_district_id_import_id_ordinal_pk" PRIMARY KEY("district_id","import_id","ordinal")
);
--> statement-breakpoint
CREATE TABLE "application_method" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"efficiency" double precision NOT NULL,
	"wetted_fraction" double precision NOT NULL,
	"under_canopy" boolean DEFAULT false NOT NULL,
	"maximum_daily_depth_mm" double precision NOT NULL,
	"trigger_fraction" double precision NOT NULL,
	"source" text NOT NULL,
	CONSTRAINT "application_method_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "crop" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"crop_group" text NOT NULL,
	"definition" jsonb NOT NULL,
	"sources" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"notes" text,
	CONSTRAINT "crop_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "crop_calendar" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"crop_code" text NOT NULL,
	"name" text NOT NULL,
	"planting_day" text,
	"definition" jsonb NOT NULL,
	"source" text NOT NULL,
	CONSTRAINT "crop_calendar_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "crop_mapping" (
	"district_id" uuid NOT NULL,
	"foreign_code" text NOT NULL,
	"crop_code" text,
	CONSTRAINT "crop_mapping_district_id_foreign_code_pk" PRIMARY KEY("district_id","foreign_code")
);
--> statement-breakpoint
CREATE TABLE "parcel" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"ordinal" integer NOT NULL,
	"name" text,
	"turnout_code" text,
	"reach_code" text,
	"soil_code" text,
	"method_code" text,
	"area_m2" double precision NOT NULL,
	"elevation_m" double precision,
	"longitude" double precision NOT NULL,
	"latitude" double precision NOT NULL,
	"west" double precision NOT NULL,
	"south" double precision NOT NULL,
	"east" double precision NOT NULL,
	"north" double precision NOT NULL,
	"geometry" jsonb NOT NULL,
	"attributes" jsonb DEFAULT '{}'::jsonb NOT NULL,
	CONSTRAINT "parcel_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "planting" (
	"district_id" uuid NOT NULL,
	"parcel_code" text NOT NULL,
	"season_code" text NOT NULL,
	"sequence" integer NOT NULL,
	"crop_code" text NOT NULL,
	"calendar_code" text NOT NULL,
	"planting_date" date NOT NULL,
	"harvest_date" date,
	"cut_dates" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"area_share" double precision DEFAULT 1 NOT NULL,
	CONSTRAINT "planting_district_id_season_code_parcel_code_sequence_pk" PRIMARY KEY("district_id","season_code","parcel_code","sequence")
);
--> statement-breakpoint
CREATE TABLE "reach" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"parent_code" text,
	"kind" text DEFAULT 'lateral' NOT NULL,
	"capacity_m3_s" double precision,
	"loss_rule" jsonb NOT NULL,
	"length_m" double precision NOT NULL,
	"geometry" jsonb NOT NULL,
	CONSTRAINT "reach_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "season" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"start_date" date NOT NULL,
	"end_date" date NOT NULL,
	CONSTRAINT "season_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "soil" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"field_capacity_m3_m3" double precision NOT NULL,
	"wilting_point_m3_m3" double precision NOT NULL,
	"evaporation_depth_m" double precision DEFAULT 0.1 NOT NULL,
	"readily_evaporable_water_mm" double precision NOT NULL,
	"total_evaporable_water_mm" double precision NOT NULL,
	"curve_number" double precision,
	"root_limit_m" double precision,
	"source" text NOT NULL,
	CONSTRAINT "soil_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "turnout" (
	"district_id" uuid NOT NULL,
	"code" text NOT NULL,
	"reach_code" text NOT NULL,
	"capacity_m3_s" double precision,
	CONSTRAINT "turnout_district_id_code_pk" PRIMARY KEY("district_id","code")
);
--> statement-breakpoint
CREATE TABLE "run" (
	"district_id" uuid NOT NULL,
	"run_id" uuid DEFAULT gen_random_uuid() NOT NULL,
	"season_code" text NOT NULL,
	"state" text DEFAULT 'queued' NOT NULL,
	"progress" real DEFAULT 0 NOT NULL,
	"stage" text DEFAULT 'waiting' NOT NULL,
	"standing" boolean DEFAULT false NOT NULL,
	"cancel_requested" boolean DEFAULT false NOT NULL,
	"start_date" date NOT NULL,
	"end_date" date NOT NULL,
	"day_count" integer NOT NULL,
	"parcel_count" integer DEFAULT 0 NOT NULL,
	"slice_count" integer DEFAULT 0 NOT NULL,
	"settings" jsonb NOT NULL,
	"manifest" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"balance" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"frozen" "bytea",
	"geometry_version" integer DEFAULT 1 NOT NULL,
	"error" text,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"started_at" timestamp with time zone,
	"finished_at" timestamp with time zone,
	CONSTRAINT "run_district_id_run_id_pk" PRIMARY KEY("district_id","run_id")
);
--> statement-breakpoint
CREATE TABLE "run_parcel" (
	"district_id" uuid NOT NULL,
	"run_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"slice" integer NOT NULL,
	"parcel_code" text NOT NULL,
	"turnout_code" text,
	"reach_code" text,
	"crop_codes" jsonb NOT NULL,
	"method_code" text NOT NULL,
	"soil_code" text NOT NULL,
	"area_m2" double precision NOT NULL,
	"input" jsonb NOT NULL,
	"daily" "bytea",
	"flags" "bytea",
	CONSTRAINT "run_parcel_district_id_run_id_position_pk" PRIMARY KEY("district_id","run_id","position")
);
--> statement-breakpoint
CREATE TABLE "run_reach" (
	"district_id" uuid NOT NULL,
	"run_id" uuid NOT NULL,
	"ordinal" smallint NOT NULL,
	"reach_code" text NOT NULL,
	"parent_code" text,
	"name" text NOT NULL,
	"kind" text NOT NULL,
	"capacity_m3_s" double precision,
	"length_m" double precision NOT NULL,
	"loss_rule" jsonb NOT NULL,
	"daily" "bytea" NOT NULL,
	CONSTRAINT "run_reach_district_id_run_id_ordinal_pk" PRIMARY KEY("district_id","run_id","ordinal")
);
--> statement-breakpoint
CREATE TABLE "run_slice" (
	"district_id" uuid NOT NULL,
	"run_id" uuid NOT NULL,
	"slice" integer NOT NULL,
	"done" boolean DEFAULT false NOT NULL,
	"max_residual_mm" double precision,
	CONSTRAINT "run_slice_district_id_run_id_slice_pk" PRIMARY KEY("district_id","run_id","slice")
);
--> statement-breakpoint
CREATE TABLE "run_value" (
	"district_id" uuid NOT NULL,
	"run_id" uuid NOT NULL,
	"variable" text NOT NULL,
	"period" text NOT NULL,
	"period_count" integer NOT NULL,
	"parcel_count" integer NOT NULL,
	"values" "bytea" NOT NULL,
	CONSTRAINT "run_value_district_id_run_id_variable_period_pk" PRIMARY KEY("district_id","run_id","variable","period")
);
--> statement-breakpoint
CREATE TABLE "tile_cache" (
	"district_id" uuid NOT NULL,
	"layer" text NOT NULL,
	"version" integer NOT NULL,
	"z" smallint NOT NULL,
	"x" integer NOT NULL,
	"y" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "tile_cache_district_id_layer_version_z_x_y_pk" PRIMARY KEY("district_id","layer","version","z","x","y")
);
--> statement-breakpoint
CREATE TABLE "site" (
	"district_id" uuid NOT NULL,
	"source_id" integer NOT NULL,
	"ordinal" integer NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"longitude" double precision NOT NULL,
	"latitude" double precision NOT NULL,
	"elevation_m" double precision,
	"wind_height_m" double precision,
	"zone" text,
	CONSTRAINT "site_district_id_source_id_ordinal_pk" PRIMARY KEY("district_id","source_id","ordinal"),
	CONSTRAINT "site_code" UNIQUE("district_id","source_id","code")
);
--> statement-breakpoint
CREATE TABLE "weather_block" (
	"district_id" uuid NOT NULL,
	"source_id" integer NOT NULL,
	"variable" text NOT NULL,
	"month" date NOT NULL,
	"site_count" integer NOT NULL,
	"day_count" integer NOT NULL,
	"values" "bytea" NOT NULL,
	"quality" "bytea" NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "weather_block_district_id_source_id_variable_month_pk" PRIMARY KEY("district_id","source_id","variable","month")
);
--> statement-breakpoint
CREATE TABLE "weather_source" (
	"district_id" uuid NOT NULL,
	"source_id" integer NOT NULL,
	"name" text NOT NULL,
	"kind" text DEFAULT 'stations' NOT NULL,
	CONSTRAINT "weather_source_district_id_source_id_pk" PRIMARY KEY("district_id","source_id"),
	CONSTRAINT "weather_source_name" UNIQUE("district_id","name")
);
--> statement-breakpoint
ALTER TABLE "auth"."account" ADD CONSTRAINT "account_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "auth"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "auth"."session" ADD CONSTRAINT "session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "auth"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "api_token" ADD CONSTRAINT "api_token_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "grower_parcel" ADD CONSTRAINT "grower_parcel_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "membership" ADD CONSTRAINT "membership_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "import_before" ADD CONSTRAINT "import_before_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "import_file" ADD CONSTRAINT "import_file_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "import" ADD CONSTRAINT "import_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "import_staged" ADD CONSTRAINT "import_staged_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "application_method" ADD CONSTRAINT "application_method_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "crop" ADD CONSTRAINT "crop_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "crop_calendar" ADD CONSTRAINT "crop_calendar_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "crop_mapping" ADD CONSTRAINT "crop_mapping_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parcel" ADD CONSTRAINT "parcel_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "planting" ADD CONSTRAINT "planting_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reach" ADD CONSTRAINT "reach_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "season" ADD CONSTRAINT "season_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soil" ADD CONSTRAINT "soil_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "turnout" ADD CONSTRAINT "turnout_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run" ADD CONSTRAINT "run_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run_parcel" ADD CONSTRAINT "run_parcel_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run_reach" ADD CONSTRAINT "run_reach_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run_slice" ADD CONSTRAINT "run_slice_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run_value" ADD CONSTRAINT "run_value_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tile_cache" ADD CONSTRAINT "tile_cache_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site" ADD CONSTRAINT "site_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_block" ADD CONSTRAINT "weather_block_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_source" ADD CONSTRAINT "weather_source_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "import_created" ON "import" USING btree ("district_id","created_at");--> statement-breakpoint
CREATE INDEX "parcel_ordinal" ON "parcel" USING btree ("district_id","ordinal");--> statement-breakpoint
CREATE INDEX "parcel_box" ON "parcel" USING btree ("district_id","west","east","south","north");--> statement-breakpoint
CREATE INDEX "turnout_reach" ON "turnout" USING btree ("district_id","reach_code");--> statement-breakpoint
CREATE INDEX "run_created" ON "run" USING btree ("district_id","created_at");--> statement-breakpoint
CREATE INDEX "run_parcel_code" ON "run_parcel" USING btree ("district_id","run_id","parcel_code");--> statement-breakpoint
CREATE INDEX "run_parcel_slice" ON "run_parcel" USING btree ("district_id","run_id","slice");--> statement-breakpoint
CREATE INDEX "weather_block_month" ON "weather_block" USING btree ("district_id","month");