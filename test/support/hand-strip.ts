/** A strip made by hand: every row holds one value on every day unless it is given, so that a printed example can be walked as it stands. */
import { emptyCurve, emptyParcelWeather, MARK, type ParcelWeather, type StripCurve } from '../../lib/season/pack.ts';
import { NO_GROUND, type StripGround } from '../../lib/season/strip-ground.ts';
import { emptyWalk, type StripWalk } from '../../lib/season/strip-walk.ts';
import { DAILY_VARIABLE_COUNT, DAILY_VARIABLES, type DailyVariable, type SeasonSettings } from '../../lib/season/types.ts';

type Rows<T> = { readonly [K in keyof T as T[K] extends Float64Array | Uint8Array | Int16Array ? K : never]?: number | readonly number[] };

export interface HandStrip {
  readonly days: number;
  readonly settings?: Partial<SeasonSettings>;
  readonly weather?: Rows<ParcelWeather>;
  readonly curve?: Rows<StripCurve> & { readonly deepestAvailable?: number };
  readonly ground?: Partial<StripGround>;
  /** Dr, Db, De on the first morning [mm] */
  readonly opening: readonly [number, number, number];
}

const ONE_PLANTING = {
  leachingRequirement: Float64Array.of(0),
  pondMinimum: Float64Array.of(0),
  pondTarget: Float64Array.of(0),
  bund: Float64Array.of(0),
  pores: Float64Array.of(0),
};

/** The walk, ready for `walkStrip`, with rows in double precision; and a reader of its rows. */
export function handStrip(given: HandStrip): { walk: StripWalk; row(variable: DailyVariable): Float64Array } {
  const { days } = given;
  const weather = emptyParcelWeather(days);
  const curve = emptyCurve(days);
  curve.refillShare.fill(1);
  curve.triggerShare.fill(1);
  curve.evaporationShare.fill(1);
  curve.openShare.fill(1);
  curve.saltStress.fill(1);
  curve.covered.fill(Number.NaN);
  curve.heightFactor.fill(0.6);
  curve.mark.fill(MARK.planted);
  fill(weather, given.weather ?? {});
  if (given.weather?.liquid === undefined) weather.liquid.set(weather.precipitation);
  fill(curve, given.curve ?? {});
  curve.deepestAvailable = given.curve?.deepestAvailable ?? Math.max(...curve.available);
  if (given.curve?.scheduleAvailable === undefined) curve.scheduleAvailable.set(curve.available);
  const settings = { method: 'fao56', initialDepletion: 0, lapseRate: 0, irrigate: true, runoff: false, ...given.settings } as const;
  const input = { startDate: '2024-01-01', dayCount: days, settings, sites: [], weather: null as never, parcels: [] };
  const walk = emptyWalk({ input, weather, curve, stageEt: new Float64Array(8), plantingShare: Float64Array.of(1) });
  const efficiency = { efficiencyDepths: Float64Array.of(0), efficiencies: Float64Array.of(1) };
  walk.ground = {
    ...NO_GROUND,
    methodWetted: 1,
    minimumDepth: 0,
    most: 1000,
    percolationRate: 0,
    ...efficiency,
    ...ONE_PLANTING,
    ...given.ground,
  };
  [walk.depletion, walk.below, walk.surface] = given.opening;
  walk.snow = 0;
  walk.share = 1;
  walk.stateShare = 1;
  const daily = new Float64Array(DAILY_VARIABLE_COUNT * days);
  walk.daily = daily;
  return {
    walk,
    row(variable) {
      const v = DAILY_VARIABLES.findIndex(({ id }) => id === variable);
      return daily.subarray(v * days, (v + 1) * days);
    },
  };
}

function fill(rows: ParcelWeather | StripCurve, given: Readonly<Record<string, number | readonly number[] | undefined>>): void {
  for (const [name, value] of Object.entries(given)) {
    const row = rows[name as keyof typeof rows] as unknown;
    if (!(row instanceof Float64Array || row instanceof Uint8Array || row instanceof Int16Array)) continue;
    if (typeof value === 'number') row.fill(value);
    else row.set(value ?? []);
  }
}
