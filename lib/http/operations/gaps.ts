import { isoDate } from '../contract/common.ts';
import { gapRow, gapsAnswer } from '../contract/gaps.ts';
import { operation } from '../operation.ts';

export const gapsOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/gaps',
  tag: 'Weather',
  summary: 'Gaps in the record of the sites and how each is filled',
  description:
    'As a run with the usual settings fills them: by regression on a neighbour within the limits of FAO-56 Annex 4, from another source, by a straight line (temperature, ' +
    'at most five days), from the normal of the day; what is left is estimated as FAO-56 chapter 3 has it. At most 400 days: the days of the run in use unless `from` and `to` ' +
    'say otherwise. Of a grid, one cell at a time: name it with `site`. A CSV holds one row for each gap.',
  scope: 'read',
  query: {
    source: gapRow.shape.site.max(120).optional().meta({ description: 'weather source by name; left out: every set of stations' }),
    site: gapRow.shape.site.max(120).optional().meta({ description: 'code of a site or cell' }),
    from: isoDate.optional(),
    to: isoDate.optional(),
  },
  answer: gapsAnswer,
  table: { row: gapRow, leaveOut: ['neighbours', 'sources'] },
  refusals: [404, 413, 422],
});
