/** Every call of the API, in the order of its documentation. */
import type { Operation } from '../operation.ts';
import * as band from './band.ts';
import * as district from './district.ts';
import * as feeds from './feeds.ts';
import * as frost from './frost.ts';
import * as gaps from './gaps.ts';
import * as images from './images.ts';
import * as imports from './imports.ts';
import * as interpolation from './interpolation.ts';
import * as land from './land.ts';
import * as landPlaces from './land-places.ts';
import * as quality from './quality.ts';
import * as records from './records.ts';
import * as runs from './runs.ts';
import * as session from './session.ts';
import * as tiles from './tiles.ts';
import * as weather from './weather.ts';
import * as yields from './yields.ts';

export const OPERATIONS: readonly Operation[] = [
  imports,
  runs,
  band,
  yields,
  land,
  landPlaces,
  images,
  records,
  weather,
  quality,
  feeds,
  gaps,
  interpolation,
  frost,
  district,
  session,
  tiles,
].flatMap((file) => Object.values(file as Record<string, unknown>).filter(isOperation));

function isOperation(value: unknown): value is Operation {
  return typeof value === 'object' && value !== null && 'method' in value && 'path' in value;
}
