/** Puts the invented district into an empty installation: land, canals, weather, people, and a run of each season. */

import type { Tx } from '../../../db/connect.ts';
import { type FirstRows, insertFirstRows, insertGrowerParcels } from '../../../db/queries/demo-rows.ts';
import { civilFromDayNumber, dayNumber, daysInMonth, isoDate } from '../../base/civil-date.ts';
import { nullFromNaN } from '../../base/missing.ts';
import { QUALITY, type SiteObservations } from '../../weather/variable.ts';
import { type DemoDistrict, demoDistrict } from './district.ts';
import { demoWeather } from './weather.ts';

/** Seed of everything invented: the same district on every machine. */
export const DEMO_SEED = 20240401;
const DEMO_SOURCE = 'Arrowmere stations (invented)';
/** How many parcels the demo's grower tends. */
const GROWER_PARCELS = 6;

interface DemoLoad {
  readonly district: DemoDistrict['district'];
  readonly seasonCodes: readonly string[];
  /** inside a transaction of the district */
  insert(tx: Tx, districtId: string): Promise<void>;
  assignGrower(tx: Tx, districtId: string, userId: string): Promise<void>;
}

export function prepareDemo(): DemoLoad {
  const demo = demoDistrict(DEMO_SEED);
  const weather = demoWeather(DEMO_SEED);
  return {
    district: demo.district,
    seasonCodes: demo.seasons.map((season) => season.code),
    insert: (tx, districtId) => insertFirstRows(tx, demoRows(districtId, demo, weather)),
    assignGrower: (tx, districtId, userId) =>
      insertGrowerParcels(
        tx,
        districtId,
        userId,
        demo.parcels.slice(100, 100 + GROWER_PARCELS).map((parcel) => parcel.code),
      ),
  };
}

function demoRows(districtId: string, demo: DemoDistrict, weather: SiteObservations): FirstRows {
  return {
    seasons: demo.seasons.map((season) => ({ districtId, ...season })),
    sources: [{ districtId, sourceId: 1, name: DEMO_SOURCE }],
    sites: weather.sites.map((site, ordinal) => ({
      districtId,
      sourceId: 1,
      ordinal,
      ...site,
      elevation: nullFromNaN(site.elevation),
      windHeight: nullFromNaN(site.windHeight),
    })),
    blocks: weatherBlocks(districtId, 1, weather),
    reaches: demo.reaches.map((reach) => ({ districtId, ...reach })),
    turnouts: demo.turnouts.map((turnout) => ({ districtId, ...turnout })),
    parcels: demo.parcels.map((parcel) => ({ districtId, ...parcel, ...boxOf(parcel.geometry.coordinates[0]) })),
    plantings: numbered(demo.plantings).map((planting) => ({ districtId, ...planting, cutDates: [...planting.cutDates] })),
  };
}

/** Order within parcel and season, from 1. */
function numbered(plantings: DemoDistrict['plantings']) {
  const count = new Map<string, number>();
  return plantings.map((planting) => {
    const key = `${planting.seasonCode}/${planting.parcelCode}`;
    const sequence = (count.get(key) ?? 0) + 1;
    count.set(key, sequence);
    return { ...planting, sequence };
  });
}

function boxOf(ring: readonly (readonly [number, number])[]) {
  const [longitudes, latitudes] = [ring.map((point) => point[0]), ring.map((point) => point[1])];
  return { west: Math.min(...longitudes), east: Math.max(...longitudes), south: Math.min(...latitudes), north: Math.max(...latitudes) };
}

/** Observations cut into monthly blocks, Float32 [site × day of month] with a quality byte per value. */
function weatherBlocks(districtId: string, sourceId: number, weather: SiteObservations): FirstRows['blocks'] {
  const first = dayNumber(weather.startDate);
  const blocks: FirstRows['blocks'] = [];
  for (const [variable, values] of Object.entries(weather.values)) {
    for (let day = 0; day < weather.dayCount; ) {
      const { year, month, day: dayOfMonth } = civilFromDayNumber(first + day);
      const dayCount = daysInMonth(year, month);
      const monthStart = day - dayOfMonth + 1;
      const grid = new Float32Array(weather.sites.length * dayCount).fill(Number.NaN);
      const quality = new Uint8Array(grid.length).fill(QUALITY.missing);
      for (let i = 0; i < grid.length; i++) {
        const source = monthStart + (i % dayCount);
        if (source < 0 || source >= weather.dayCount) continue;
        const value = values[Math.floor(i / dayCount) * weather.dayCount + source];
        if (Number.isNaN(value)) continue;
        grid[i] = value;
        quality[i] = QUALITY.measured;
      }
      const key = { districtId, sourceId, variable, month: isoDate(first + monthStart) };
      blocks.push({ ...key, siteCount: weather.sites.length, dayCount, values: new Uint8Array(grid.buffer), quality });
      day = monthStart + dayCount;
    }
  }
  return blocks;
}
