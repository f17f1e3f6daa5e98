/** The days of a run that no forecast reaches: the normal of the day, or the days of an analogue year. */
import { civilFromDayNumber, isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import { Refused } from '../base/errors.ts';
import { holdAtSaturation } from '../energy/moved-weather.ts';
import { representativeYear, sameDay, sameDays, type YearTally, yearsOnRecord } from '../weather/analogue-year.ts';
import { hasDriver, putSiteDay } from '../weather/days-ahead.ts';
import { NORMAL_WINDOW } from '../weather/normal-of-day.ts';
import { type CompletedWeather, FALLBACK } from '../weather/variable.ts';
import { analogueYearOf } from './ahead-settings.ts';
import { siteNormals, yearsText } from './run-ahead-normals.ts';
import type { AheadRecord, Telling } from './run-ahead-record.ts';

/** Fewest years on record for a season of which no day has been observed. The product's own limit. */
const FEWEST_YEARS = 2;
/** The days that no forecast reaches. */
export async function putBeyond(weather: CompletedWeather, telling: Telling): Promise<Pick<AheadRecord, 'normals'>> {
  const { settings, lastObserved, days, openCount, seasonStart } = telling;
  const normals = await siteNormals({ ...telling, siteCount: telling.sites.length, method: settings.method });
  const years = yearsOnRecord(normals.tallies, openCount);
  if (lastObserved < seasonStart && years.length < FEWEST_YEARS) {
    throw new Refused(
      `No day of the season from ${seasonStart} has been observed, and ${counted(years.length, 'year is', 'years are')} on record for its days; at least ${FEWEST_YEARS} are needed to tell it ahead. Import weather of earlier years, or of the season.`,
    );
  }
  if (settings.ahead === 'analogue') {
    await putAnalogue(weather, telling);
    return { normals: null };
  }
  const rainYear = representativeYear(normals.tallies, openCount);
  putNormals(weather, telling, normals.series);
  await putRain(weather, telling, rainYear);
  const last = days.first + days.dayCount - 1;
  if (years.length === 0) return { normals: null };
  const rain = rainYear ? civilFromDayNumber(last).year - rainYear.yearsBack : null;
  return { normals: { years: years.length, of: yearsText(years, last), window_days: NORMAL_WINDOW, rain_year: rain } };
}

/** Site-days that have nothing yet, on open days: `visit(site, day to come, index in the weather)`. */
function eachOpen(
  weather: CompletedWeather,
  { open, offset, sites }: Telling,
  visit: (site: number, day: number, at: number) => void,
): void {
  for (let site = 0; site < sites.length; site++) {
    for (let day = 0; day < open.length; day++) {
      const at = site * weather.dayCount + offset + day;
      if (open[day] === 1 && !hasDriver(weather, at)) visit(site, day, at);
    }
  }
}

type Normals = Awaited<ReturnType<typeof siteNormals>>['series'];

function putNormals(weather: CompletedWeather, telling: Telling, normals: Normals): void {
  const { dayCount } = telling.days;
  eachOpen(weather, telling, (site, day, at) => {
    const value = (series: keyof Normals) => normals[series]?.[site * dayCount + day] ?? Number.NaN;
    if (Number.isNaN(value('airTemperatureMax')) && Number.isNaN(value('referenceEt'))) return;
    weather.airTemperatureMax[at] = value('airTemperatureMax');
    weather.airTemperatureMin[at] = value('airTemperatureMin');
    weather.actualVapourPressure[at] = value('actualVapourPressure');
    weather.solarRadiation[at] = value('solarRadiation');
    weather.windSpeed2m[at] = value('windSpeed2m');
    holdAtSaturation(weather, at);
    if (weather.referenceEt) weather.referenceEt[at] = value('referenceEt');
    weather.flags[at] = FALLBACK.aheadFromNormal;
  });
}

/** Rain of the representative year on the days of normals; none where it has none on record, which is flagged. */
async function putRain(weather: CompletedWeather, telling: Telling, year: YearTally | null): Promise<void> {
  const { days, offset, open, sites } = telling;
  const span = year ? sameDays(days, year.yearsBack) : null;
  const then = span ? await telling.weatherIn(span) : null;
  for (let site = 0; site < sites.length; site++) {
    for (let day = 0; day < open.length; day++) {
      const at = site * weather.dayCount + offset + day;
      if ((weather.flags[at] & FALLBACK.aheadFromNormal) === 0) continue;
      const same = year ? sameDay(days.first + day, year.yearsBack) : null;
      const from = same && span && then ? site * then.dayCount + same.day - span.first : -1;
      const rain = same?.repeated ? 0 : (then?.precipitation[from] ?? Number.NaN);
      weather.precipitation[at] = Number.isNaN(rain) ? 0 : rain;
      const assumed = Number.isNaN(rain) || (!same?.repeated && ((then?.flags[from] ?? 0) & FALLBACK.precipitationAssumedZero) !== 0);
      if (assumed) weather.flags[at] |= FALLBACK.precipitationAssumedZero;
    }
  }
}

async function putAnalogue(weather: CompletedWeather, telling: Telling): Promise<void> {
  const { settings, days, openCount } = telling;
  const year = analogueYearOf(settings);
  const yearsBack = civilFromDayNumber(days.first + days.dayCount - 1).year - year;
  const span = sameDays(days, yearsBack);
  const onRecord = yearsBack > 0 && isoDate(span.first + span.dayCount - 1) <= telling.lastObserved;
  const then = onRecord ? await telling.weatherIn(span) : null;
  const found = new Set<number>();
  if (then) {
    eachOpen(weather, telling, (site, day, at) => {
      const same = sameDay(days.first + day, yearsBack);
      const from = site * then.dayCount + same.day - span.first;
      if (!hasDriver(then, from)) return;
      putSiteDay(weather, at, then, from, FALLBACK.aheadFromAnalogue);
      if (same.repeated) weather.precipitation[at] = 0;
      // a day filled with the normal of other years is not of this year
      if ((then.flags[from] & FALLBACK.temperatureFromNormal) === 0) found.add(day);
    });
  }
  if (found.size === openCount) return;
  throw new Refused(
    `analogue_year ${year} is not on record for the days to come: ${counted(openCount - found.size, 'day', 'days')} of ${isoDate(span.first)} to ${isoDate(span.first + span.dayCount - 1)} have no weather at any site. Take a year that is on record, or ahead "normal".`,
  );
}
