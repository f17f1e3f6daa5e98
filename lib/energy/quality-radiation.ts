/** Single days of radiation, sunshine and rain against the sky. */
import { brokenRuns, daysText, type Flag, figureText, seriesOf, withUnit } from '../weather/quality/flag.ts';
import type { SiteObservations } from '../weather/variable.ts';
import type { SiteSky } from './quality-sky.ts';

/** Share above Rso that reflection from cloud explains on a day. Source: FAO-56 Annex 5 says "briefly"; the share is the product's own. */
const ABOVE_CLEAR_SKY = 0.1;
/** Share of Ra below which even the darkest day does not fall. Source: common practice, no source. */
const DARK = 0.03;
/** Least Ra at which a day can be called dark [MJ m⁻² d⁻¹]. */
const LEAST_SUN = 5;
/** Tolerance of the length of the day [h]: the heliograph burns before and after the geometric day. */
const DAYLIGHT_SLACK = 0.5;
/** A clear day for the rain note, and rain that cannot fall unseen on it [mm]. */
const CLEAR = 0.97;
const RAIN_ON_CLEAR = 10;

/** Days of solar radiation above the sky's limits, or near nothing. Source: as the rules. */
export function checkRadiationDays(observations: SiteObservations, sky: SiteSky): Flag[] {
  const { site } = sky;
  const radiation = seriesOf(observations, 'solar_radiation_mj_m2_d', site);
  const flags = radiation ? radiationFlags(observations, sky, radiation) : [];
  return [...flags, ...sunshineFlags(observations, sky), ...(radiation ? clearRainFlags(observations, sky, radiation) : [])];
}

function radiationFlags(observations: SiteObservations, sky: SiteSky, radiation: Float64Array): Flag[] {
  const { site, extraterrestrial, clearSky } = sky;
  const variable = 'solar_radiation_mj_m2_d';
  const words = (value: number) => withUnit(value, variable);
  const common = (first: number, last: number, worst: number) =>
    ({ site, variable, firstDay: first, lastDay: last, value: radiation[worst] }) as const;
  const aboveTop = (day: number) => radiation[day] - extraterrestrial[day] - 0.05;
  const top = brokenRuns(radiation.length, aboveTop).map(
    ({ first, last, worst }): Flag => ({
      ...common(first, last, worst),
      ...{ rule: 'radiation-above-extraterrestrial', severity: 'impossible', limit: extraterrestrial[worst] },
      detail: `Solar radiation ${words(radiation[worst])} ${daysText(observations, first, last)} is more than the ${words(extraterrestrial[worst])} that reach the top of the atmosphere: look for a wrong unit or place, and reject the days.`,
    }),
  );
  const clear = brokenRuns(radiation.length, (day) =>
    aboveTop(day) > 0 ? Number.NaN : radiation[day] - clearSky[day] * (1 + ABOVE_CLEAR_SKY) - 0.2,
  ).map(
    ({ first, last, worst }): Flag => ({
      ...common(first, last, worst),
      ...{ rule: 'radiation-above-clear-sky', severity: 'suspect', limit: clearSky[worst] * (1 + ABOVE_CLEAR_SKY) },
      detail: `Solar radiation ${words(radiation[worst])} ${daysText(observations, first, last)} is ${figureText((radiation[worst] / clearSky[worst] - 1) * 100)} % above the clear-sky ${words(clearSky[worst])}; reflection from cloud lifts a day by less than ${ABOVE_CLEAR_SKY * 100} %. Check the calibration, or reject the days.`,
      figures: { clear_sky_mj_m2_d: clearSky[worst] },
    }),
  );
  const dark = brokenRuns(radiation.length, (day) =>
    extraterrestrial[day] > LEAST_SUN ? DARK * extraterrestrial[day] - radiation[day] : Number.NaN,
  ).map(
    ({ first, last, worst }): Flag => ({
      ...common(first, last, worst),
      ...{ rule: 'radiation-dark', severity: 'suspect', limit: DARK * extraterrestrial[worst] },
      detail: `Solar radiation ${words(radiation[worst])} ${daysText(observations, first, last)} is under 3 % of the ${words(extraterrestrial[worst])} at the top of the atmosphere; the darkest overcast lets more through. Snow on the dome, a cut cable or a shaded sensor: reject the days.`,
    }),
  );
  return [...top, ...clear, ...dark];
}

function sunshineFlags(observations: SiteObservations, { site, daylight }: SiteSky): Flag[] {
  const variable = 'sunshine_duration_h';
  const sunshine = seriesOf(observations, variable, site);
  if (!sunshine) return [];
  return brokenRuns(sunshine.length, (day) => sunshine[day] - daylight[day] - DAYLIGHT_SLACK).map(
    ({ first, last, worst }): Flag => ({
      ...{ site, variable, rule: 'sunshine-above-daylight', severity: 'impossible', firstDay: first, lastDay: last },
      ...{ value: sunshine[worst], limit: daylight[worst] },
      detail: `${withUnit(sunshine[worst], variable)} of sunshine ${daysText(observations, first, last)}, with ${withUnit(daylight[worst], variable)} of daylight: the date or the unit is wrong.`,
    }),
  );
}

function clearRainFlags(observations: SiteObservations, { site, clearSky }: SiteSky, radiation: Float64Array): Flag[] {
  const variable = 'precipitation_mm';
  const rain = seriesOf(observations, variable, site);
  if (!rain) return [];
  return brokenRuns(rain.length, (day) => (radiation[day] > CLEAR * clearSky[day] ? rain[day] - RAIN_ON_CLEAR : Number.NaN)).map(
    ({ first, last, worst }): Flag => ({
      ...{
        site,
        variable,
        rule: 'rain-on-clear-day',
        severity: 'note',
        firstDay: first,
        lastDay: last,
        value: rain[worst],
        limit: RAIN_ON_CLEAR,
      },
      detail: `${withUnit(rain[worst], variable)} of rain ${daysText(observations, first, last)}, a day with ${figureText((radiation[worst] / clearSky[worst]) * 100)} % of clear-sky radiation: rain of the night or of the day before, a sprinkler at the gauge, or a date one off.`,
    }),
  );
}
