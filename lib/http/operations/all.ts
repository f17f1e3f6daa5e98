/** Every call of the API, in the order of its documentation. */
import type { Operation } from '../operation.ts';
import * as district from './district.ts';
import * as feeds from './feeds.ts';
import * as gaps from './gaps.ts';
import * as imports from './imports.ts';
import * as interpolation from './interpolation.ts';
import * as land from './land.ts';
import * as landPlaces from './land-places.ts';
import * as quality from './quality.ts';
import * as runs from './runs.ts';
import * as session from './session.ts';
import * as tiles from './tiles.ts';
import * as weather from './weather.ts';

export const OPERATIONS: readonly Operation[] = [
  imports,
  runs,
  land,
  landPlaces,
  weather,
  quality,
  feeds,
  gaps,
  interpolation,
  district,
  session,
  tiles,
].flatMap((file) => Object.values(file as Record<string, unknown>).filter(isOperation));

function isOperation(value: unknown): value is Operation {
  return typeof value === 'object' && value !== null && 'method' in value && 'path' in value;
}
