/** What fields are taken for, their units, and what is missing in them. */
import { describe, expect, it } from 'vitest';
import { parseTimeUnits } from '../../lib/files/grid-epoch.ts';
import { dateInText } from '../../lib/files/grid-geotiff.ts';
import { fieldRole, windHeightOfField } from '../../lib/files/grid-roles.ts';
import { growthOf } from '../../lib/files/grid-sample.ts';
import { chooseUnit, gridUnit } from '../../lib/files/grid-units.ts';
import { spreadOf } from '../../lib/files/unit-guess.ts';
import { fakeArrays, findingCodes, gridAxes, gridField, readFakes, stagedValue } from '../support/fake-arrays.ts';

const variable = (name: string, attributes: Record<string, string> = {}) =>
  ({ name, dimensions: ['time'], shape: [1], type: 'float32', chunk: null, attributes }) as const;
const DAYS = { units: 'days since 2024-01-01', calendar: 'standard' };
const axes = gridAxes([46, 45, 44], [10, 11], [0, 1, 2], DAYS);
const COUNTS = [3, 3, 2] as const;

describe('roles', () => {
  it.each([
    ['tasmax', { standard_name: 'air_temperature' }, 'air_temperature_max_c'],
    ['x', { standard_name: 'air_temperature', cell_methods: 'time: minimum' }, 'air_temperature_min_c'],
    ['t2m', { standard_name: 'unknown' }, 'air_temperature_mean_c'],
    ['tmmn', {}, 'air_temperature_min_c'],
    ['d2m', {}, 'dew_point_c'],
    ['hurs', { standard_name: 'relative_humidity' }, 'relative_humidity_mean_pct'],
    ['rmax', {}, 'relative_humidity_max_pct'],
    ['u10', {}, 'eastward_wind_m_s'],
    ['SWGDN', {}, 'solar_radiation_mj_m2_d'],
    ['var7', { long_name: 'Incoming solar radiation' }, 'solar_radiation_mj_m2_d'],
    ['msl', { standard_name: 'air_pressure_at_mean_sea_level' }, null],
    ['SWGDNCLR', { standard_name: 'surface_incoming_shortwave_flux_assuming_clear_sky' }, null],
    ['sfcWindmax', { standard_name: 'wind_speed_of_gust' }, null],
    ['wsmax', { standard_name: 'wind_speed', cell_methods: 'time: maximum' }, null],
    ['albedo', {}, null],
  ])('%s %o is %s', (name, attributes, role) => {
    expect(fieldRole(variable(name, attributes), name, {}).role).toBe(role);
  });

  it('lets the plan go before the names, and ignore', () => {
    const options = { plan: { columns: { tas: { role: null }, q: { role: 'dew_point_c' }, z: { role: 'nonsense' } } } };
    expect(fieldRole(variable('tas'), 'tas', options)).toMatchObject({ role: null, reason: 'left out by the plan' });
    expect(fieldRole(variable('q'), 'q', options)).toMatchObject({ role: 'dew_point_c', confidence: 1 });
    expect(fieldRole(variable('z'), 'z', options).reason).toContain('nonsense');
  });

  it('only offers potential evaporation, and takes reference ET', () => {
    expect(fieldRole(variable('evspsblpot'), 'evspsblpot', {})).toMatchObject({
      role: 'reference_et_given_mm',
      confidence: 0.3,
      taken: false,
    });
    expect(fieldRole(variable('et0'), 'et0', {})).toMatchObject({ role: 'reference_et_given_mm', taken: true });
  });

  it.each([
    ['u10', {}, Number.NaN, 10],
    ['sfcWind', {}, Number.NaN, 10],
    ['ws', { long_name: 'Wind speed at 2 metres' }, Number.NaN, 2],
    ['wind', {}, 10, 10],
    ['wind', {}, Number.NaN, null],
  ])('height of %s %o', (name, attributes, coordinate, height) => {
    expect(windHeightOfField(variable(name, attributes), name, coordinate)).toBe(height);
  });
});

describe('units', () => {
  it.each([
    ['air_temperature_mean_c', 'K', 300, 26.85],
    ['air_temperature_mean_c', 'degF', 212, 100],
    ['precipitation_mm', 'm', 0.004, 4],
    ['precipitation_mm', 'kg m-2', 4, 4],
    ['solar_radiation_mj_m2_d', 'J m**-2', 2e7, 20],
    ['wind_speed_m_s', 'knots', 10, 5.144444],
    ['wind_speed_m_s', 'km h-1', 36, 10],
    ['pressure_kpa', 'Pa', 101325, 101.325],
    ['relative_humidity_mean_pct', '%', 55, 55],
    ['specific_humidity_kg_kg', 'g kg-1', 12, 0.012],
    ['elevation_m', 'm**2 s**-2', 980.665, 100],
    ['sunshine_duration_h', 's', 36000, 10],
  ] as const)('%s in %s: %d is %d', (role, text, stored, inside) => {
    const unit = gridUnit(role, text);
    expect(stored * (unit?.factor ?? Number.NaN) + (unit?.offset ?? Number.NaN)).toBeCloseTo(inside, 5);
  });

  it.each([
    ['kg m-2 s-1', 'second'],
    ['mm/day', 'day'],
    ['mm', 'step'],
  ])('%s of rain is per %s', (text, per) => {
    expect(gridUnit('precipitation_mm', text)?.per).toBe(per);
  });

  it.each([
    ['relative_humidity_mean_pct', '', [0.3, 0.8], 'fraction'],
    ['relative_humidity_mean_pct', '%', [0.3, 0.8], 'fraction'],
    ['relative_humidity_mean_pct', '', [30, 80], '%'],
    ['air_temperature_mean_c', 'degC', [280, 300], 'K'],
    ['air_temperature_mean_c', '', [280, 300], 'K'],
    ['pressure_kpa', 'hPa', [98000, 101000], 'Pa'],
    ['precipitation_mm', 'kg m-2 s-1', [0, 5, 12], 'mm'],
    ['solar_radiation_mj_m2_d', '', [150, 280], 'W/m²'],
  ] as const)('%s with unit "%s" and values %o is read as %s, and says so', (role, text, values, expected) => {
    const chosen = chooseUnit(role, text, spreadOf([...values]), 86400);
    expect(chosen.unit.name).toBe(expected);
    expect(chosen.assumed).not.toBeNull();
  });
});

describe('missing values', () => {
  it('holds fill values and the valid range against the packed number', async () => {
    const packed = { units: 'degC', scale_factor: [0.1], add_offset: [10], _FillValue: [-32767], valid_min: [-100], valid_max: [250] };
    const tas = { ...gridField(COUNTS, packed, (t, r) => (t === 0 && r === 0 ? -32767 : t === 1 ? 251 : 100)), type: 'int16' as const };
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, tas }) });
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r0c0', '2024-01-01')).toBeNaN();
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c0', '2024-01-01')).toBeCloseTo(20, 6);
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c0', '2024-01-02')).toBeNaN();
    expect(findingCodes(reading)).toContain('missing-value');
  });

  it('finds the code that the file does not declare, and counts it', async () => {
    const pr = { ...gridField(COUNTS, { units: 'mm' }, (_, r) => (r === 2 ? Math.fround(-3276.7) : 4)), type: 'float32' as const };
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, pr }) });
    const finding = reading.findings.find(({ code }) => code === 'undeclared-missing-code');
    expect(finding).toMatchObject({ severity: 'warning', value: '-3276.7' });
    expect(finding?.message).toContain('6 values are -3276.7');
    expect(reading.staged).toMatchObject({ sites: 4 });
  });

  it('names an impossible value with its cell and day', async () => {
    const tas = gridField(COUNTS, { units: 'degC' }, (t, r, c) => (t === 2 && r === 1 && c === 1 ? 71.5 : 12));
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, tas }) });
    const finding = reading.findings.find(({ code }) => code === 'value-out-of-range');
    expect(finding?.message).toContain('71.5 in r1c1 on 2024-01-03');
    expect(stagedValue(reading, 'air_temperature_mean_c', 'r1c1', '2024-01-03')).toBeNaN();
  });

  it('reads a trace below zero as zero', async () => {
    const pr = gridField(COUNTS, { units: 'mm' }, () => -1e-12);
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, pr }) });
    expect(stagedValue(reading, 'precipitation_mm', 'r0c0', '2024-01-01')).toBe(0);
  });
});

describe('potential evaporation', () => {
  const evspsblpot = gridField(COUNTS, { units: 'kg m-2 s-1' }, () => 5 / 86400);
  const tas = gridField(COUNTS, { units: 'degC' }, () => 15);

  it('is not staged unless the plan says so', async () => {
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, tas, evspsblpot }) });
    expect(stagedValue(reading, 'reference_et_given_mm', 'r0c0', '2024-01-01')).toBeNaN();
    expect(findingCodes(reading)).toContain('not-reference-et');
    expect(reading.understood.columns.find(({ header }) => header === 'evspsblpot')).toMatchObject({
      role: 'reference_et_given_mm',
      confidence: 0.3,
    });
  });

  it('is staged on the plan', async () => {
    const plan = { columns: { evspsblpot: { role: 'reference_et_given_mm' } } };
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, tas, evspsblpot }) }, { plan });
    expect(stagedValue(reading, 'reference_et_given_mm', 'r0c0', '2024-01-01')).toBeCloseTo(5, 5);
  });
});

describe('combinations', () => {
  it('makes vapour pressure of a deficit and temperature', async () => {
    // es(20 °C) = 0.6108 exp(17.27 · 20 / 257.3) = 2.3383 kPa (FAO-56 Table 2.3: 2.338); less 0.9
    const tas = gridField(COUNTS, { units: 'degC' }, () => 20);
    const vpd = gridField(COUNTS, { units: 'hPa' }, () => 9);
    const reading = await readFakes({ 'a.nc': fakeArrays({ ...axes, tas, vpd }) });
    expect(stagedValue(reading, 'vapour_pressure_kpa', 'r0c0', '2024-01-01')).toBeCloseTo(1.438, 3);
  });

  it('warns of daily components of wind, and of one alone', async () => {
    const uas = gridField(COUNTS, { units: 'm s-1' }, () => 3);
    const vas = gridField(COUNTS, { units: 'm s-1' }, () => -4);
    const both = await readFakes({ 'a.nc': fakeArrays({ ...axes, uas, vas }) });
    expect(stagedValue(both, 'wind_speed_m_s', 'r0c0', '2024-01-01')).toBe(5);
    expect(both.staged).toMatchObject({ cells: expect.arrayContaining([expect.objectContaining({ code: 'r0c0', windHeight: 10 })]) });
    expect(both.findings.find(({ code }) => code === 'wind-from-components')?.severity).toBe('warning');
    const alone = await readFakes({ 'a.nc': fakeArrays({ ...axes, uas }) });
    expect(findingCodes(alone)).toContain('wind-component-missing');
  });
});

describe('small readers', () => {
  it.each([
    ['days since 1950-01-01 00:00:00', 86400, 0],
    ['hours since 1900-01-01 00:00:0.0', 3600, 0],
    ['days since 1949-12-01T00:00:00Z', 86400, 0],
    ['minutes since 2020-01-01 00:30:00', 60, 1800],
    ['seconds since 1970-01-01', 1, 0],
  ])('reads "%s"', (text, stepSeconds, second) => {
    expect(parseTimeUnits(text)).toMatchObject({ stepSeconds, epoch: { second } });
  });

  it.each(['months since 1950-01-01', 'days since last year', 'K'])('refuses "%s"', (text) => {
    expect(parseTimeUnits(text)).toHaveProperty('fault');
  });

  it.each([
    ['tmax_20240229', '2024-02-29', 'tmax'],
    ['tmax.2024-02-29.v1', '2024-02-29', 'tmax_v1'],
    ['rain-2024060', '2024-02-29', 'rain'],
  ])('finds the date in %s', (text, date, rest) => {
    const found = dateInText(text);
    expect(new Date((found?.day ?? Number.NaN) * 864e5).toISOString().slice(0, 10)).toBe(date);
    expect(found?.rest).toBe(rest);
  });

  it.each(['tile_20241399', 'dem_10m', 'x2023366'])('finds none in %s', (text) => {
    expect(dateInText(text)).toBeNull();
  });

  it('tells amounts that grow through a forecast from amounts of steps', () => {
    const day = [0, 0, 0, 0, 0, 0, 0.2, 0.8, 1.4, 1.9, 2.4, 2.6, 2.7, 2.6, 2.3, 1.9, 1.3, 0.7, 0.2, 0, 0, 0, 0, 0];
    const single = [...day, ...day, ...day, ...day, ...day];
    let sum = 0;
    const growing = single.map((value, hour) => {
      sum = hour % 24 === 1 ? value : sum + value;
      return sum;
    });
    expect(growthOf(single, 3600)).toBeNull();
    expect(growthOf(growing, 3600)).toEqual({ period: 24, start: 25 });
  });
});
