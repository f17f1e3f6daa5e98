import { z } from 'zod';
import { isoDate, pageOf } from '../contract/common.ts';
import {
  checkAnswer,
  correctionAnswer,
  correctionRequest,
  flagAnswer,
  flagState,
  previewAnswer,
  rule,
  severity,
  weatherVariable,
} from '../contract/quality.ts';
import { operation } from '../operation.ts';
import { pageQuery } from '../paging.ts';

const tag = 'Weather quality';
const name = z.string().min(1).max(120).optional();

export const listFlagsOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/flags',
  tag,
  summary: 'What the checks found in the record of the stations, the gravest first',
  description:
    'One row per rule and run of days, with value, limit and advice. A flag changes no value: an open one marks its days as suspect, a decision settles it.',
  scope: 'read',
  query: {
    source: name,
    site: name,
    variable: weatherVariable.optional(),
    rule: rule.optional(),
    state: flagState.optional(),
    severity: severity.optional(),
    from: isoDate.optional().meta({ description: 'flags that reach this day or a later one' }),
    to: isoDate.optional().meta({ description: 'flags that begin on this day or an earlier one' }),
    ...pageQuery(200, 2000),
  },
  answer: pageOf(flagAnswer).meta({ id: 'WeatherFlagPage' }),
  table: { row: flagAnswer, leaveOut: ['figures'] },
});

export const listCorrectionsOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/corrections',
  tag,
  summary: 'Decisions laid over the record, the newest first, with reason, maker and time',
  scope: 'read',
  query: {
    source: name,
    site: name,
    variable: weatherVariable.optional(),
    standing: z.enum(['true', 'false']).optional().meta({ description: 'false: only those that were undone' }),
    ...pageQuery(200, 2000),
  },
  answer: z.object({ items: z.array(correctionAnswer), next_cursor: z.string().nullable() }).meta({ id: 'WeatherCorrectionPage' }),
  table: { row: correctionAnswer, leaveOut: ['values'] },
});

export const makeCorrectionOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/corrections',
  tag,
  summary: 'Accept, correct or reject values of a station',
  description:
    'A layer over the raw record, which is never changed. Of two layers on one day the later one stands, on the raw value. The source is checked again and the seasons it touches are computed anew.',
  scope: 'write',
  body: correctionRequest,
  status: 201,
  answer: correctionAnswer,
  refusals: [404, 422],
});

export const previewCorrectionOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/corrections/preview',
  tag,
  summary: 'What a decision would make of the values and of reference ET, without making it',
  scope: 'read',
  body: correctionRequest.partial({ reason: true }).meta({ id: 'WeatherCorrectionPreviewRequest' }),
  answer: previewAnswer,
  refusals: [404, 422],
});

export const undoCorrectionOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/corrections/{id}/undo',
  tag,
  summary: 'Undo a decision: the record is again what it would be without it',
  scope: 'write',
  params: { id: z.guid() },
  answer: correctionAnswer,
  refusals: [404, 409],
});

export const readChecksOperation = operation({
  method: 'GET',
  path: '/api/v1/weather/check',
  tag,
  summary: 'The last check of each source: counts, pyranometers, offers for dry surroundings',
  scope: 'read',
  answer: z.object({ items: z.array(checkAnswer) }),
});

export const runCheckOperation = operation({
  method: 'POST',
  path: '/api/v1/weather/check',
  tag,
  summary: 'Check sources again, in the background',
  scope: 'write',
  body: z.strictObject({ source: name }).meta({ id: 'WeatherCheckRequest' }),
  status: 202,
  answer: z.object({ sources: z.array(z.string()) }),
  refusals: [404],
});
