/** What holds for any record: raw values never change, decisions come off without a trace, and checks are the same however sites are ordered. */
import { describe, expect, it } from 'vitest';
import { mulberry32, type Random } from '../../lib/base/random.ts';
import { actualVapourPressureFromDewPoint, dewPointFromActualVapourPressure } from '../../lib/energy/humidity.ts';
import { layAridity } from '../../lib/energy/quality-aridity.ts';
import { checkSource } from '../../lib/energy/quality-check.ts';
import { applyCorrections } from '../../lib/energy/quality-corrections.ts';
import { observedVapourPressure } from '../../lib/energy/quality-sky.ts';
import type { Correction, CorrectionAct } from '../../lib/weather/quality/correction.ts';
import { QUALITY, type SiteObservations, type WeatherVariable } from '../../lib/weather/variable.ts';
import { soundRecord, withFault } from '../support/quality-record.ts';

const ACTS: readonly CorrectionAct[] = ['accept', 'factor', 'offset', 'replace', 'reject', 'aridity'];
const OPTIONS = { defaultElevation: 0, radiationCoefficient: 0.16, today: '2026-01-01' };

function randomCorrection(random: Random, record: SiteObservations): Correction {
  const act = ACTS[Math.floor(random() * ACTS.length)];
  const variables = Object.keys(record.values) as WeatherVariable[];
  const firstDay = Math.floor(random() * record.dayCount) - 3;
  return {
    site: Math.floor(random() * record.sites.length),
    variable: act === 'aridity' ? 'air_temperature_min_c' : variables[Math.floor(random() * variables.length)],
    firstDay,
    lastDay: firstDay + Math.floor(random() * 40),
    act,
    amount: act === 'factor' ? 0.8 + 0.4 * random() : 3 * random(),
  };
}

const bytesOf = (record: SiteObservations) =>
  Object.entries(record.values).map(([name, series]) => `${name} ${Buffer.from(series?.buffer ?? new ArrayBuffer(0)).toString('base64')}`);

describe('decisions', () => {
  it('never change the raw record, and the same decisions give the same record', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = mulberry32(seed);
      const raw = soundRecord(120);
      const before = bytesOf(raw);
      const corrections = Array.from({ length: 8 }, () => randomCorrection(random, raw));
      const once = applyCorrections(raw, corrections, 0);
      expect(bytesOf(raw)).toEqual(before);
      expect(applyCorrections(raw, corrections, 0)).toEqual(once);
    }
  });

  it('come off without a trace: with the last taken away the record is what it was before it', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const random = mulberry32(seed);
      const raw = soundRecord(120);
      const earlier = Array.from({ length: 4 }, () => randomCorrection(random, raw));
      const standing = bytesOf(applyCorrections(raw, earlier, 0));
      const last = randomCorrection(random, raw);
      applyCorrections(raw, [...earlier, last], 0);
      expect(bytesOf(applyCorrections(raw, earlier, 0))).toEqual(standing);
      expect(bytesOf(applyCorrections(raw, [], 0))).toEqual(bytesOf(raw));
    }
  });

  it('leave everything outside their days, site and variable alone', () => {
    const raw = soundRecord(60);
    const layered = applyCorrections(
      raw,
      [{ site: 1, variable: 'wind_speed_m_s', firstDay: 10, lastDay: 12, act: 'factor', amount: 2 }],
      0,
    );
    for (const [name, series] of Object.entries(raw.values)) {
      const own = layered.values[name as WeatherVariable] as Float64Array;
      series?.forEach((value, i) => {
        const inside = name === 'wind_speed_m_s' && i >= 70 && i <= 72;
        expect(own[i]).toBe(inside ? value * 2 : value);
        if (name === 'wind_speed_m_s') expect(layered.quality?.wind_speed_m_s?.[i]).toBe(inside ? QUALITY.corrected : QUALITY.measured);
      });
    }
  });

  it('of two on one day leave the later one, on the raw value; a missing value is only ever replaced', () => {
    const raw = withFault(soundRecord(10), 'wind_speed_m_s', 0, (value, day) => (day === 5 ? Number.NaN : value));
    const at = { site: 0, variable: 'wind_speed_m_s', firstDay: 4, lastDay: 5 } as const;
    const two = [
      { ...at, act: 'factor', amount: 3 },
      { ...at, act: 'offset', amount: 1 },
    ] as const;
    const wind = applyCorrections(raw, two, 0).values.wind_speed_m_s as Float64Array;
    expect(wind[4]).toBe((raw.values.wind_speed_m_s?.[4] ?? 0) + 1);
    expect(wind[5]).toBeNaN();
    const replaced = applyCorrections(raw, [...two, { ...at, act: 'replace', amount: 2.5 }], 0);
    expect([...(replaced.values.wind_speed_m_s ?? []).slice(4, 6)]).toEqual([2.5, 2.5]);
    const accepted = applyCorrections(raw, [...two, { ...at, act: 'accept', amount: Number.NaN }], 0);
    expect(accepted.values.wind_speed_m_s?.[4]).toBe(raw.values.wind_speed_m_s?.[4]);
  });
});

describe('adjustment for dry surroundings', () => {
  it('leaves the minimum temperature Ko above the dew point where it was more, and does nothing a second time', () => {
    const dry = withFault(soundRecord(90), 'dew_point_c', 0, (value, day) => (day % 3 === 0 ? value : value - 8));
    const act: Correction = { site: 0, variable: 'air_temperature_min_c', firstDay: 0, lastDay: 89, act: 'aridity', amount: 2 };
    const wet = layAridity(dry, [act], 0);
    for (let day = 0; day < 90; day++) {
      const before = (dry.values.air_temperature_min_c?.[day] ?? 0) - (dry.values.dew_point_c?.[day] ?? 0);
      const vapour = observedVapourPressure(wet, 0, 800)[day];
      const after = (wet.values.air_temperature_min_c?.[day] ?? 0) - dewPointFromActualVapourPressure(vapour);
      expect(after).toBeCloseTo(Math.min(before, 2), 9);
      const [max, range] = [
        wet.values.air_temperature_max_c?.[day] ?? 0,
        (dry.values.air_temperature_max_c?.[day] ?? 0) - (dry.values.air_temperature_min_c?.[day] ?? 0),
      ];
      expect(max - (wet.values.air_temperature_min_c?.[day] ?? 0)).toBeCloseTo(range, 9);
    }
    const twice = layAridity(wet, [act], 0);
    for (let day = 0; day < 90; day++)
      expect(twice.values.air_temperature_min_c?.[day]).toBeCloseTo(wet.values.air_temperature_min_c?.[day] ?? 0, 9);
  });

  it('works on whatever humidity the site reports', () => {
    const dew = withFault(soundRecord(30), 'dew_point_c', 0, (value) => value - 8);
    const { dew_point_c: point, ...others } = dew.values;
    const vapour = { ...dew, values: { ...others, vapour_pressure_kpa: point?.map(actualVapourPressureFromDewPoint) } };
    const act: Correction = { site: 0, variable: 'air_temperature_min_c', firstDay: 0, lastDay: 29, act: 'aridity', amount: 2 };
    const [a, b] = [layAridity(dew, [act], 0), layAridity(vapour, [act], 0)];
    for (let day = 0; day < 30; day++) {
      expect(a.values.vapour_pressure_kpa?.[day]).toBeCloseTo(b.values.vapour_pressure_kpa?.[day] ?? 0, 9);
    }
  });
});

describe('checks', () => {
  it('give the same flags whatever the order of the sites', () => {
    const record = withFault(soundRecord(400), 'air_temperature_max_c', 2, (value, day) => (day === 200 ? value + 28 : value));
    const turned: SiteObservations = {
      ...record,
      sites: [...record.sites].reverse(),
      values: Object.fromEntries(
        Object.entries(record.values).map(([name, series]) => [
          name,
          Float64Array.from(series ?? [], (_, i) => series?.[(2 - Math.floor(i / 400)) * 400 + (i % 400)] ?? Number.NaN),
        ]),
      ),
    };
    const told = (of: SiteObservations) =>
      checkSource(of, OPTIONS)
        .flags.map((flag) => `${of.sites[flag.site].code} ${flag.variable} ${flag.rule} ${flag.firstDay} ${flag.lastDay} ${flag.severity}`)
        .sort();
    expect(told(turned)).toEqual(told(record));
  });
});
