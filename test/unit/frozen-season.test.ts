/** What is frozen beside a run comes back as it was, of this kernel version and of the first. */
import { gzipSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { packFrozenSeason, unpackFrozenSeason } from '../../lib/jobs/frozen-season.ts';
import { DEFAULT_RUN_SETTINGS } from '../../lib/jobs/run-settings.ts';
import { storedFlags } from '../../lib/season/daily-store.ts';
import { COMPLETED_SERIES, type CompletedWeather } from '../../lib/weather/variable.ts';
import { randomSeason } from '../support/random-season.ts';

const { sites, weather, startDate } = randomSeason({ seed: 5, parcels: 1, days: 33, sites: 3 });
const libraries = { soils: {}, methods: {}, crops: {}, calendars: {} };
const season = { startDate, settings: DEFAULT_RUN_SETTINGS, sites, weather, libraries };

function sameArrays(a: CompletedWeather, b: CompletedWeather): void {
  for (const name of [...COMPLETED_SERIES, 'flags'] as const) expect(a[name], name).toEqual(b[name]);
}

describe('a frozen season', () => {
  // names of several lengths, so that the header ends on every place between 8 bytes
  test.each(['S', 'Sé', 'S12', 'Site 4', 'Site fi', 'Site six', 'Site seven', 'Site eighty'])(
    'comes back bit for bit (%s)',
    async (name) => {
      const named = { ...season, sites: sites.map((site) => ({ ...site, name })) };
      const back = unpackFrozenSeason(await packFrozenSeason(named));
      sameArrays(back.weather, weather);
      expect(back.weather.referenceEt).toBeUndefined();
      expect(back.sites).toEqual(named.sites);
    },
  );

  test('with reference ET at the sites, and bits beyond the sixteenth', async () => {
    const referenceEt = Float64Array.from(weather.windSpeed2m, (value) => value + 1);
    const flags = weather.flags.map((bits) => bits | (1 << 25));
    const back = unpackFrozenSeason(await packFrozenSeason({ ...season, weather: { ...weather, referenceEt, flags } }));
    expect(back.weather.referenceEt).toEqual(referenceEt);
    expect(back.weather.flags).toEqual(flags);
  });

  test('of the first kernel version: six series and bits of 16', () => {
    const header = Buffer.from(JSON.stringify({ startDate, settings: {}, sites, siteCount: 3, dayCount: 33, libraries }));
    const length = Buffer.alloc(4);
    length.writeUInt32LE(header.length);
    const flags = Uint16Array.from(weather.flags, (bits) => bits & 0xffff);
    const arrays = [...COMPLETED_SERIES.map((name) => weather[name]), flags];
    const bytes = arrays.map((array) => Buffer.from(array.buffer, array.byteOffset, array.byteLength));
    const back = unpackFrozenSeason(gzipSync(Buffer.concat([length, header, ...bytes])));
    sameArrays(back.weather, { ...weather, flags: Uint32Array.from(flags) });
  });
});

describe('stored bits of a parcel', () => {
  test('32 bits a day, or 16 in runs of the first kernel version', () => {
    expect([...storedFlags(new Uint8Array(Uint32Array.of(1, 1 << 20, 0).buffer), 3)]).toEqual([1, 1 << 20, 0]);
    expect([...storedFlags(new Uint8Array(Uint16Array.of(1, 1 << 13, 0).buffer), 3)]).toEqual([1, 1 << 13, 0]);
  });
});
