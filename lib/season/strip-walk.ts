/** What the walk over a strip is given, and what it leaves behind. */
import type { DayRecord } from './day-record.ts';
import type { ParcelWeather, StripCurve } from './pack.ts';
import { NO_GROUND, type StripGround } from './strip-ground.ts';
import type { SeasonInput } from './types.ts';

/** Rows that a member of an ensemble fills, each [day kept] over the parcel [mm]; null where nobody asks. */
export interface MemberRows {
  readonly netRequirement: Float64Array | null;
  readonly grossRequirement: Float64Array | null;
  readonly adjustedCropEt: Float64Array | null;
}

/** What a strip's walk reads, and where it writes. */
export interface StripWalk {
  /** days stepped, the first `lead` of them without leaving anything in the rows */
  days: number;
  lead: number;
  /** false: rain-fed */
  irrigate: boolean;
  /** Kc in place of Kcb + Ke: no surface layer */
  single: boolean;
  weather: ParcelWeather;
  /** of the weather, or with a member's factors */
  referenceEt: Float64Array;
  curve: StripCurve;
  ground: StripGround;
  /** the strip in its parcel: by area, and in the means of the soil's state */
  share: number;
  stateShare: number;
  /** Dr, Db, De on the first morning, and the snow that lay [mm] */
  depletion: number;
  below: number;
  surface: number;
  snow: number;
  /** left behind: water that went below the deepest root, with what still stands in a pond [mm] */
  percolated: number;
  /** lower edge of the soil below the root zone [m]; not read by the walk */
  deepestRoot: number;
  /** rows in double precision, added to, [variable × day kept]; null where `stored` takes them */
  daily: Float64Array | null;
  /** rows as stored, of a strip that is the whole parcel, from `storedAt` on; they must be 0 */
  stored: Uint16Array | null;
  storedAt: number;
  /** a few rows alone, added to, where neither of the two is there */
  rows: MemberRows | null;
  /** ETc and ETc adj by planting and stage, added to; share of a planting's area that lies on this strip, by planting */
  stageEt: Float64Array;
  plantingShare: Float64Array;
  /** day whose record is wanted, −1 for none */
  heardDay: number;
  hear: ((record: DayRecord) => void) | null;
}

/** A walk over nothing yet; the NaNs keep the fields in double representation. */
export function emptyWalk(
  given: Pick<StripWalk, 'weather' | 'curve' | 'stageEt' | 'plantingShare'> & { readonly input: SeasonInput },
): StripWalk {
  const { input, ...rows } = given;
  const unset = Number.NaN;
  return {
    days: input.dayCount,
    lead: input.leadDays ?? 0,
    irrigate: input.settings.irrigate,
    single: input.settings.coefficient === 'single',
    ...rows,
    referenceEt: rows.weather.referenceEt,
    ground: NO_GROUND,
    share: unset,
    stateShare: unset,
    depletion: unset,
    below: unset,
    surface: unset,
    snow: unset,
    percolated: unset,
    deepestRoot: unset,
    daily: null,
    stored: null,
    storedAt: 0,
    rows: null,
    heardDay: -1,
    hear: null,
  };
}
