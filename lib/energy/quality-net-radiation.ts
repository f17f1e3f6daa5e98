/** A net radiometer against net radiation computed from its neighbours on the mast. */
import { daysText, type Flag, figureText, seriesOf } from '../weather/quality/flag.ts';
import type { SiteObservations } from '../weather/variable.ts';
import type { SiteSky } from './quality-sky.ts';
import { energyBudgetDay } from './reference-day.ts';

/** Chronic distance that is noted, as a share. Source: FAO-56 Annex 5, 3–5 %. */
const NOTED = 0.05;
/** Fewest days of a verdict. */
const LEAST_DAYS = 60;

/**
 * Measured net radiation that is off the computed by more than 5 % over the record. The computed one is that of the reference surface, so a
 * radiometer over something else than short green grass is off by right: a note, never more.
 *
 * Source: FAO-56 Annex 5; net radiation by FAO-56 Eq. 38–40.
 */
export function checkNetRadiation(observations: SiteObservations, sky: SiteSky): Flag[] {
  const { site, latitude, elevation } = sky;
  const variable = 'net_radiation_mj_m2_d';
  const of = (name: Parameters<typeof seriesOf>[1]) => seriesOf(observations, name, site);
  const [net, max, min, radiation] = [
    of(variable),
    of('air_temperature_max_c'),
    of('air_temperature_min_c'),
    of('solar_radiation_mj_m2_d'),
  ];
  if (!net || !max || !min || !radiation) return [];
  let [count, measured, computed, first, last] = [0, 0, 0, -1, -1];
  for (let day = 0; day < net.length; day++) {
    if (Number.isNaN(net[day] + max[day] + min[day] + radiation[day] + sky.vapourPressure[day])) continue;
    const { netRadiation } = energyBudgetDay({
      ...{ method: 'fao56', surface: 'short', dayOfYear: sky.dayOfYear[day], latitude, elevation, windSpeed2m: 2 },
      ...{ airTemperatureMax: max[day], airTemperatureMin: min[day] },
      ...{ actualVapourPressure: sky.vapourPressure[day], solarRadiation: radiation[day] },
    });
    count++;
    measured += net[day];
    computed += netRadiation;
    if (first < 0) first = day;
    last = day;
  }
  if (count < LEAST_DAYS || !(computed > 0)) return [];
  const off = measured / computed - 1;
  if (Math.abs(off) <= NOTED) return [];
  return [
    {
      ...{ site, variable, rule: 'net-radiation-off', severity: 'note', firstDay: first, lastDay: last, value: off * 100 },
      limit: Math.sign(off) * NOTED * 100,
      detail: `Measured net radiation is ${figureText(Math.abs(off) * 100)} % ${off > 0 ? 'above' : 'below'} the computed one over ${count} days ${daysText(observations, first, last)}; more than 3 to 5 % all the time asks for a calibration, unless the radiometer looks at something else than short green grass.`,
      figures: { days: count },
    },
  ];
}
