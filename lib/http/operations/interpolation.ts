import { z } from 'zod';
import { isoDate } from '../contract/common.ts';
import { CARRIED_NAMES, interpolationAnswer, interpolationRow, interpolationRows } from '../contract/interpolation.ts';
import { operation } from '../operation.ts';

const name = z.string().min(1).max(120).optional();

export const interpolationOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/interpolation',
  tag: 'Weather',
  summary: 'How far off each way of carrying weather between stations is, by leaving one station out at a time',
  description:
    'Per variable and method: bias, RMSE, mean absolute error and, for kriging, the mean squared deviation ratio, over measured values alone; the semivariogram with its fitted model; errors by station. ' +
    'Days are those of `season`, or `from` and `to` (at most 400); left out, the newest season that has weather, else the last 365 days. Stations only, at most 200.',
  scope: 'read',
  query: {
    source: name.meta({ description: 'weather source by name; left out: every set of stations' }),
    season: name,
    from: isoDate.optional(),
    to: isoDate.optional(),
    variable: z.enum(CARRIED_NAMES).optional().meta({ description: 'only this variable' }),
    method: z.string().max(60).optional().meta({ description: 'method whose errors by station are shown, e.g. `inverse-distance-2`' }),
  },
  answer: interpolationAnswer,
  table: { row: interpolationRow, rows: interpolationRows },
  refusals: [404, 413, 422],
});
