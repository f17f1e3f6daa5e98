import type { Caller } from '../../../lib/access/caller.ts';
import { TillwaterError } from '../../../lib/base/errors.ts';
import { celsiusFromFahrenheit, METRES_PER_SECOND_PER_MPH } from '../../../lib/base/units.ts';
import { GROUND_NAMES } from '../../../lib/energy/frost-cooling.ts';
import { SKY_NAMES } from '../../../lib/energy/frost-sky.ts';
import { answerFrost, answerFrozenNights, type FrostAsked, frostShapes } from '../../../lib/http/answers/frost.ts';
import type { FrostAnswer, FrostRow, FrozenNightAnswer } from '../../../lib/http/contract/frost.ts';
import { hrefWith, one, oneOf, type Query } from '../../_components/query.ts';
import { RISKS } from './frost-words.ts';

export const FROST_PATH = '/frost';
/** Key of a stage in the address: `stage.apple=full-pink`. */
export const STAGE_KEY = 'stage.';
/** Most parcels drawn on the map, and rows in the table. */
export const MOST_DRAWN = 3000;
export const MOST_ROWS = 200;
/** At which a tenth of open blossom is killed, 28 °F [°C]: a night that cold is the one to look at first. */
const HURTS_BLOOM = -2.2;

export interface LoadedFrost {
  readonly night: FrostAnswer;
  /** with a risk, the worst first */
  readonly atRisk: readonly FrostRow[];
  readonly shapes: ReadonlyMap<string, unknown>;
  readonly nights: readonly FrozenNightAnswer[];
  readonly asked: FrostAsked;
  /** address of the whole table as CSV */
  readonly csv: string;
}

/** What can be chosen when the night itself was refused. */
export interface RefusedFrost {
  readonly refusal: string;
  readonly nights: readonly FrozenNightAnswer[];
  readonly asked: FrostAsked | null;
}

/** The night the address asks for; left out: the newest night on record that was cold enough to hurt open blossom, else one that froze, else the last one. */
export async function loadFrost(caller: Caller, query: Query): Promise<LoadedFrost | RefusedFrost> {
  let nights: FrozenNightAnswer[] = [];
  let asked: FrostAsked | null = null;
  try {
    const record = await answerFrozenNights(caller, { source: one(query, 'source') });
    nights = record.items;
    const inBud = nights.filter((night) => night.in_bud);
    const usual = (inBud.find((night) => night.minimum_c <= HURTS_BLOOM) ?? inBud[0])?.date ?? record.last;
    const date = one(query, 'date') ?? usual;
    if (!date) return { refusal: 'The district has no weather yet.', nights, asked };
    asked = frostAsked(query, date);
    const wrong = wrongEntry(query);
    if (wrong) return { refusal: wrong, nights, asked };
    const night = await answerFrost(caller, { ...asked, limit: Number.MAX_SAFE_INTEGER });
    const atRisk = night.items.filter(({ risk }) => risk !== null && risk !== 'none').toSorted(worstFirst);
    const drawn = night.items.slice(0, MOST_DRAWN).map(({ parcel }) => parcel);
    const shapes = await frostShapes(caller, [...new Set(drawn)]);
    return { night, atRisk, shapes, nights, asked, csv: hrefWith('/api/v1/frost.csv', {}, { ...paramsOf(asked), units: caller.units }) };
  } catch (error) {
    if (error instanceof TillwaterError) return { refusal: error.message, nights, asked };
    throw error;
  }
}

function worstFirst(a: FrostRow, b: FrostRow): number {
  const place = ({ risk }: FrostRow) => RISKS.findIndex((each) => each.risk === risk);
  const margin = (row: FrostRow) => (row.leaf_minimum_c ?? 0) - (row.critical_10_c ?? 0);
  return place(a) - place(b) || margin(a) - margin(b);
}

/** Entries of an evening of one's own, with what each takes in the units it is written in. */
const ENTRIES: readonly { readonly key: string; readonly name: string; readonly metric: Limits; readonly us: Limits }[] = [
  { key: 'temperature', name: 'Air temperature at sunset', metric: [-40, 50, '°C'], us: [-40, 122, '°F'] },
  { key: 'dew', name: 'Dew point at sunset', metric: [-50, 40, '°C'], us: [-58, 104, '°F'] },
  { key: 'wind', name: 'Wind', metric: [0, 40, 'm/s'], us: [0, 90, 'mph'] },
  { key: 'cloud', name: 'Cloud', metric: [0, 100, '%'], us: [0, 100, '%'] },
];

type Limits = readonly [low: number, high: number, unit: string];

/** The first entry that is no number within its limits, in words; null when all are. */
function wrongEntry(query: Query): string | null {
  for (const { key, name, metric, us } of ENTRIES) {
    const text = one(query, key);
    const [low, high, unit] = one(query, 'in') === 'us' ? us : metric;
    if (text === undefined || text === '' || (Number(text) >= low && Number(text) <= high)) continue;
    return `${name} "${text.slice(0, 20)}" is not a number from ${low} to ${high} ${unit}: correct it above.`;
  }
  return null;
}

/** What the address asks for, with an evening of the reader's own in the units it was written in. */
export function frostAsked(query: Query, date: string): FrostAsked {
  const us = one(query, 'in') === 'us';
  const number = (key: string) => (one(query, key) ? Number(one(query, key)) : undefined);
  const degrees = (key: string) => change(number(key), us ? celsiusFromFahrenheit : same);
  const cloud = number('cloud');
  return {
    date,
    source: one(query, 'source'),
    air_temperature_c: degrees('temperature'),
    dew_point_c: degrees('dew'),
    wind_speed_m_s: change(number('wind'), us ? (mph) => mph * METRES_PER_SECOND_PER_MPH : same),
    cloud_share: change(cloud, (percent) => percent / 100),
    method: oneOf(query, 'method', ['auto', 'brunt'], 'auto'),
    sky: oneOf(query, 'sky', SKY_NAMES, 'fao56'),
    ground: oneOf(query, 'ground', GROUND_NAMES, 'moist'),
    stages: stagesOf(query),
    rotation_s: oneOf(query, 'rotation', ['30', '60'], '30'),
  };
}

function change(value: number | undefined, by: (value: number) => number): number | undefined {
  return value === undefined ? undefined : by(value);
}

function same(value: number): number {
  return value;
}

function stagesOf(query: Query): string | undefined {
  const chosen = Object.keys(query)
    .filter((key) => key.startsWith(STAGE_KEY))
    .flatMap((key) => {
      const stage = one(query, key);
      return stage && stage !== 'auto' ? [`${key.slice(STAGE_KEY.length)}:${stage}`] : [];
    });
  return chosen.length > 0 ? chosen.join(',') : undefined;
}

/** The same as query of the API. */
function paramsOf(asked: FrostAsked): Record<string, string> {
  return Object.fromEntries(Object.entries(asked).flatMap(([key, value]) => (value === undefined ? [] : [[key, String(value)]])));
}
