import { z } from 'zod';
import { GROUND_NAMES } from '../../energy/frost-cooling.ts';
import { SKY_NAMES } from '../../energy/frost-sky.ts';
import { isoDate } from '../contract/common.ts';
import { criticalRow, FROST_RISKS, frostAnswer, frostRow, frostWorkingAnswer, frozenNight, frozenNights } from '../contract/frost.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const degrees = (what: string) => z.coerce.number().min(-60).max(50).optional().meta({ description: what });
const CAUTION =
  'An estimate, no warning service: it does not replace local advice, thermometers in the field or the judgement of a licensed practitioner.';

/** What a night is computed with. */
export const FROST_QUERY = {
  date: isoDate.meta({ description: 'evening of the night' }),
  source: z
    .string()
    .min(1)
    .max(120)
    .optional()
    .meta({ description: 'weather source by name, which may be a forecast; left out: every set of stations' }),
  air_temperature_c: degrees('at sunset; with dew_point_c, wind_speed_m_s and cloud_share an evening of one’s own, for tonight'),
  dew_point_c: degrees('at sunset'),
  wind_speed_m_s: z.coerce.number().min(0).max(30).optional().meta({ description: 'of the night, 2 m above ground' }),
  cloud_share: z.coerce.number().min(0).max(1).optional().meta({ description: '0 clear … 1 overcast' }),
  method: z.enum(['auto', 'brunt']).default('auto').meta({
    description:
      'auto: the station’s own line where 20 past nights of the same kind (clear and calm, or not) allow one, else Brunt’s square-root law',
  }),
  sky: z.enum(SKY_NAMES).default('fao56').meta({ description: 'form of the long-wave radiation of the sky' }),
  ground: z.enum(GROUND_NAMES).default('moist').meta({ description: 'how much heat the ground can give' }),
  stages: z.string().max(2000).optional().meta({
    description:
      'stage by table or crop, e.g. `apple:full-pink,peach:auto`; `<crop>:sweet-cherry.first-white` takes another table for a crop, `<crop>:-1.5` a critical temperature of one’s own in °C',
  }),
  rotation_s: z.enum(['30', '60']).default('30').meta({ description: 'time in which a sprinkler turns once' }),
};

export const frostOperation = operation({
  method: 'GET',
  path: '/api/v1/frost',
  tag: 'Frost',
  summary: 'Plantings at risk of radiation frost on a night, with the water that sprinkling would take',
  description: `Per planting with a table of critical temperatures: lowest air and leaf temperature with a band, stage, critical temperatures, risk, rate, flow and water of sprinkling. Growers get their own parcels. ${CAUTION}`,
  scope: 'read',
  query: {
    ...FROST_QUERY,
    risk: z
      .enum([...FROST_RISKS, 'any'])
      .optional()
      .meta({ description: 'only this risk; `any`: severe, damaging or possible' }),
    ...pageQuery(1000, 10_000),
  },
  units: true,
  answer: frostAnswer,
  table: { row: frostRow },
  refusals: [404, 413, 422],
});

export const frostWorkingOperation = operation({
  method: 'GET',
  path: '/api/v1/frost/working',
  tag: 'Frost',
  summary: 'How the frost night of one planting was worked out, step by step',
  description: CAUTION,
  scope: 'read',
  query: {
    ...FROST_QUERY,
    parcel: z.string().min(1).max(120),
    planting: z.coerce
      .number()
      .int()
      .min(1)
      .optional()
      .meta({ description: 'place in the list of the parcel; left out: the first that frost can hurt' }),
  },
  answer: frostWorkingAnswer,
  refusals: [404, 422],
});

export const frostNightsOperation = operation({
  method: 'GET',
  path: '/api/v1/frost/nights',
  tag: 'Frost',
  summary: 'Nights on record that froze, newest first',
  scope: 'read',
  query: { source: FROST_QUERY.source },
  units: true,
  answer: frozenNights,
  table: { row: frozenNight },
  refusals: [404, 422],
});

export const criticalTemperaturesOperation = operation({
  method: 'GET',
  path: '/api/v1/frost/critical-temperatures',
  tag: 'Frost',
  summary: 'Critical temperatures of fruit buds by stage',
  description: 'As printed in °F, and in °C. The thermal time of a stage is rough and recalled.',
  scope: 'read',
  answer: z.object({ items: z.array(criticalRow) }).meta({ id: 'CriticalTemperatures' }),
  table: { row: criticalRow },
});
