-- Days and map arrays are packed by the service: compressing them once more costs time and gains nothing, and a slice of a plain value is read alone.
ALTER TABLE "run_parcel" ALTER COLUMN "daily" SET STORAGE EXTERNAL;--> statement-breakpoint
ALTER TABLE "run_value" ALTER COLUMN "values" SET STORAGE EXTERNAL;
