/**
 * The rules of the quality desk: one row each with its plain name, what it looks at and where it is published. "Recalled" marks a source
 * that was not re-read; "common practice" a habit of the trade without one.
 */

interface RuleText {
  readonly name: string;
  /** `day`: the days of a flag are themselves in doubt; `record`: the flag tells of the instrument or the surroundings */
  readonly about: 'day' | 'record';
  readonly source: string;
  /** unit of value and limit where it is not that of the variable */
  readonly unit?: string;
}

const ANNEX_4 = 'FAO-56 Annex 4';
const ANNEX_5 = 'FAO-56 Annex 5';
const ASCE_D = 'ASCE-EWRI 2005 Appendix D (recalled)';
const DURRE = 'Durre et al. 2010, J. Appl. Meteor. Climatol. 49, 1615–1633 (recalled)';
const WMO_8 = 'WMO-No. 8, Guide to Instruments and Methods of Observation (recalled)';

export const RULES = {
  range: { name: 'Outside physical limits', about: 'day', source: WMO_8 },
  'extremes-crossed': { name: 'Maximum below minimum', about: 'day', source: `${WMO_8}, internal consistency` },
  'mean-outside-extremes': { name: 'Mean outside the extremes', about: 'day', source: `${WMO_8}, internal consistency` },
  spike: { name: 'Spike', about: 'day', source: `${DURRE}, spike and dip check` },
  step: { name: 'Step from day to day', about: 'day', source: `${WMO_8}, step check; limit from the record itself` },
  persistence: {
    name: 'Same value for days',
    about: 'day',
    source: `${WMO_8}, persistence check; length from the record itself`,
    unit: 'd',
  },
  'wind-stuck': { name: 'Anemometer stuck', about: 'day', source: `${ANNEX_5}; ${ASCE_D}`, unit: 'd' },
  'wind-still': { name: 'Anemometer still', about: 'day', source: `${ANNEX_5}; ${ASCE_D}` },
  'wind-below-neighbours': { name: 'Wind low against neighbours', about: 'record', source: ASCE_D, unit: '1' },
  'radiation-above-extraterrestrial': { name: 'Radiation above the top of the atmosphere', about: 'day', source: 'FAO-56 Eq. 21' },
  'radiation-above-clear-sky': { name: 'Radiation above clear sky', about: 'day', source: `${ANNEX_5}; ${ASCE_D}` },
  'radiation-dark': { name: 'Radiation near nothing', about: 'day', source: 'common practice, no source' },
  'radiation-envelope': { name: 'Clear days off the clear-sky curve', about: 'record', source: `${ANNEX_5}; ${ASCE_D}`, unit: '1' },
  'radiation-drift': { name: 'Pyranometer drifts', about: 'record', source: `${ANNEX_5}; ${ASCE_D}`, unit: '% per year' },
  'sunshine-above-daylight': { name: 'More sunshine than daylight', about: 'day', source: 'FAO-56 Eq. 34' },
  'net-radiation-off': { name: 'Net radiation off the computed', about: 'record', source: ANNEX_5, unit: '%' },
  'rain-on-clear-day': { name: 'Rain on a clear day', about: 'day', source: 'common practice, no source' },
  'dew-point-above-minimum': { name: 'Dew point above minimum temperature', about: 'day', source: `${ANNEX_5}; ${ASCE_D}` },
  'dew-point-far-below-minimum': { name: 'Dew point far below minimum temperature', about: 'record', source: `${ASCE_D}; FAO-56 Annex 6` },
  'vapour-pressure-above-saturation': { name: 'Vapour pressure above saturation', about: 'day', source: 'FAO-56 Eq. 11, 12' },
  'humidity-above-saturation': { name: 'Humidity above 100 %', about: 'day', source: ANNEX_5 },
  'humidity-never-saturated': { name: 'Nights never near saturation', about: 'record', source: `${ANNEX_5}; ${ASCE_D}` },
  'humidity-low-in-rain': { name: 'Humidity low in rain', about: 'record', source: ANNEX_5 },
  'neighbour-outlier': { name: 'Off the neighbours', about: 'day', source: `${ANNEX_4}, regression; limit after ${DURRE}` },
  inhomogeneous: { name: 'Record breaks against a neighbour', about: 'record', source: `${ANNEX_4}, ellipse of cumulative residuals` },
  'station-moved': { name: 'Station moved', about: 'record', source: `${ANNEX_4}, homogeneity of the record`, unit: 'm' },
} as const satisfies Record<string, RuleText>;

export type Rule = keyof typeof RULES;

/** True where an open flag of the rule puts the days themselves in doubt. */
export function doubtsItsDays(rule: string): boolean {
  return rule in RULES && RULES[rule as Rule].about === 'day';
}
