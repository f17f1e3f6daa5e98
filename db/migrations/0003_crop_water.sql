CREATE TABLE "delivery" (
	"district_id" uuid NOT NULL,
	"parcel_code" text NOT NULL,
	"date" date NOT NULL,
	"volume_m3" double precision NOT NULL,
	CONSTRAINT "delivery_district_id_parcel_code_date_pk" PRIMARY KEY("district_id","parcel_code","date")
);
--> statement-breakpoint
CREATE TABLE "field_measurement" (
	"district_id" uuid NOT NULL,
	"parcel_code" text NOT NULL,
	"date" date NOT NULL,
	"quantity" text NOT NULL,
	"depth_m" double precision DEFAULT 0 NOT NULL,
	"value" double precision NOT NULL,
	CONSTRAINT "field_measurement_district_id_parcel_code_date_quantity_depth_m_pk" PRIMARY KEY("district_id","parcel_code","date","quantity","depth_m")
);
--> statement-breakpoint
CREATE TABLE "image_mean" (
	"district_id" uuid NOT NULL,
	"parcel_code" text NOT NULL,
	"date" date NOT NULL,
	"quantity" text NOT NULL,
	"value" double precision NOT NULL,
	"seen_share" double precision NOT NULL,
	CONSTRAINT "image_mean_district_id_parcel_code_date_quantity_pk" PRIMARY KEY("district_id","parcel_code","date","quantity")
);
--> statement-breakpoint
CREATE TABLE "run_band" (
	"district_id" uuid NOT NULL,
	"run_id" uuid NOT NULL,
	"level" text NOT NULL,
	"variable" text NOT NULL,
	"period" text NOT NULL,
	"period_count" integer NOT NULL,
	"place_count" integer NOT NULL,
	"values" "bytea" NOT NULL,
	CONSTRAINT "run_band_district_id_run_id_level_variable_period_pk" PRIMARY KEY("district_id","run_id","level","variable","period")
);
--> statement-breakpoint
ALTER TABLE "application_method" ADD COLUMN "system" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "planting" ADD COLUMN "practice" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "soil" ADD COLUMN "profile" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "run" ADD COLUMN "band" jsonb;--> statement-breakpoint
ALTER TABLE "run_parcel" ADD COLUMN "stage_et" "bytea";--> statement-breakpoint
ALTER TABLE "run_parcel" ADD COLUMN "stage_days" "bytea";--> statement-breakpoint
ALTER TABLE "run_parcel" ADD COLUMN "closing" jsonb;--> statement-breakpoint
ALTER TABLE "weather_source" ADD COLUMN "role" text DEFAULT 'observed' NOT NULL;--> statement-breakpoint
ALTER TABLE "delivery" ADD CONSTRAINT "delivery_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "field_measurement" ADD CONSTRAINT "field_measurement_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "image_mean" ADD CONSTRAINT "image_mean_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "run_band" ADD CONSTRAINT "run_band_district_id_district_district_id_fk" FOREIGN KEY ("district_id") REFERENCES "public"."district"("district_id") ON DELETE cascade ON UPDATE no action;