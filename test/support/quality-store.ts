/** A record put into the database as an import would leave it. */
import type { Tx } from '../../db/connect.ts';
import { site, weatherBlock, weatherSource } from '../../db/schema/weather.ts';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { monthsOf } from '../../lib/weather/quality/flag.ts';
import type { SiteObservations, WeatherVariable } from '../../lib/weather/variable.ts';

export interface StoredSource {
  readonly sourceId: number;
  readonly name: string;
  readonly kind?: 'stations' | 'grid';
  readonly rank?: number;
}

/** @param record whole months, from the first day of one to the last day of one */
export async function storeRecord(tx: Tx, districtId: string, source: StoredSource, record: SiteObservations): Promise<void> {
  const { sites, startDate, dayCount, values } = record;
  await tx.insert(weatherSource).values({ districtId, ...source });
  await tx.insert(site).values(
    sites.map(({ code, name, longitude, latitude, elevation, windHeight }, ordinal) => ({
      ...{ districtId, sourceId: source.sourceId, ordinal, code, name, longitude, latitude, elevation, windHeight },
    })),
  );
  for (const { first, last } of monthsOf(startDate, dayCount)) {
    const days = last - first + 1;
    for (const variable of Object.keys(values) as WeatherVariable[]) {
      const series = values[variable] as Float64Array;
      const block = Float32Array.from(
        { length: sites.length * days },
        (_, i) => series[Math.floor(i / days) * dayCount + first + (i % days)],
      );
      const month = new Date((dayNumber(startDate) + first) * 86_400_000).toISOString().slice(0, 10);
      await tx.insert(weatherBlock).values({
        ...{ districtId, sourceId: source.sourceId, variable, month, siteCount: sites.length, dayCount: days },
        values: new Uint8Array(block.buffer),
        quality: Uint8Array.from(block, (value) => (Number.isNaN(value) ? 0 : 1)),
      });
    }
  }
}
