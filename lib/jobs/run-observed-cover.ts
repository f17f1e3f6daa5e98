/** Basal coefficients of a run's parcels from the images of its season. */
import type { ImageMean } from '../../db/queries/image-means.ts';
import { dayNumber } from '../base/civil-date.ts';
import { basalFromCover, coverFromIndex } from '../crop/observed-cover.ts';
import type { Crop, DatedValues, Planting } from '../season/types.ts';

/** What of a planting tells which crop an image saw. */
type Seen = Pick<Planting, 'plantingDate' | 'harvestDate' | 'canopy'> & { readonly crop: Pick<Crop, 'heightMax' | 'canopy'> };

/**
 * Observed basal coefficient of each parcel that has images: cover from the index, coefficient from cover, with the height of the crop that stood there
 * on the day. Days on which nothing was planted are passed over; where a day has cover and index, the cover counts.
 *
 * @param images by parcel, then by day, as `listImageMeans` gives them
 * @param plantingsOf plantings of a parcel, with their crops
 * @param startDate first day of the run's calendar: offsets are counted from it
 * Source: `coverFromIndex` and `basalFromCover`.
 */
export function observedBasal(
  images: readonly ImageMean[],
  plantingsOf: (parcel: string) => readonly Seen[],
  startDate: string,
): Map<string, DatedValues> {
  const byParcel = new Map<string, Map<string, ImageMean>>();
  for (const image of images) {
    const days = byParcel.get(image.parcelCode) ?? new Map<string, ImageMean>();
    if (!days.has(image.date) || image.quantity === 'fraction_covered') days.set(image.date, image);
    byParcel.set(image.parcelCode, days);
  }
  const first = dayNumber(startDate);
  const observed = new Map<string, DatedValues>();
  for (const [parcel, days] of byParcel) {
    const plantings = plantingsOf(parcel);
    const used = [...days.values()].flatMap((image) => {
      const planting = standingOn(plantings, image.date);
      return planting ? [{ day: dayNumber(image.date) - first, value: basalOf(image, planting) }] : [];
    });
    if (used.length > 0) observed.set(parcel, { days: used.map(({ day }) => day), values: used.map(({ value }) => value) });
  }
  return observed;
}

/** The planting begun last of those that stand on a day. */
function standingOn(plantings: readonly Seen[], date: string): Seen | null {
  const standing = plantings.filter(
    ({ plantingDate, harvestDate }) => plantingDate <= date && (harvestDate === null || date < harvestDate),
  );
  return standing.reduce<Seen | null>((latest, one) => (latest === null || one.plantingDate > latest.plantingDate ? one : latest), null);
}

function basalOf({ quantity, value }: ImageMean, { crop, canopy }: Seen): number {
  const given = canopy ?? crop.canopy;
  const cover = quantity === 'vegetation_index' ? coverFromIndex(value) : value;
  return basalFromCover({ cover, height: given?.height ?? crop.heightMax, stomatalFactor: given?.stomatalFactor });
}
