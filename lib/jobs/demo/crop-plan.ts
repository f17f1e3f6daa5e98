/**
 * What grows where in the invented district: soils by ground, crops by soil and parcel, a rotation from season to season, methods by crop.
 */
import { addDays } from '../../base/civil-date.ts';
import type { Random } from '../../base/random.ts';
import type { StagedPlanting } from '../../files/reading.ts';

/** What decides a parcel's crop. */
interface Ground {
  readonly zone: 'bottom' | 'bench';
  readonly pivot: boolean;
  /** ha */
  readonly hectares: number;
  readonly soilCode: string;
}

type CropPlan =
  | 'alfalfa'
  | 'pasture'
  | 'apple'
  | 'peach'
  | 'grape'
  | 'maize'
  | 'wheat'
  | 'wheat-double'
  | 'beet'
  | 'bean'
  | 'onion'
  | 'potato';

/** A crop as the district grows it. Days are MM-DD of the season's second calendar year, unless `autumn`: then of its first. */
interface Habit {
  readonly cropCode: string;
  readonly calendarCode: string;
  readonly plantingDay: string;
  readonly autumn?: boolean;
  readonly harvestDay: string | null;
  /** days from planting to each cut */
  readonly cuts: readonly number[];
}

const ORCHARD_REGION = 'killing-frost-high-latitudes-deciduous-orchard-row';
const HABITS: Record<CropPlan | 'sweet-maize' | 'green-bean' | 'sudan', Habit> = {
  alfalfa: { cropCode: 'alfalfa-hay', calendarCode: 'alfalfa-hay-idaho', plantingDay: '04-01', harvestDay: null, cuts: [75, 120, 165] },
  pasture: {
    cropCode: 'pasture-rotated-grazing',
    calendarCode: 'pasture-rotated-grazing-all-year',
    plantingDay: '04-05',
    harvestDay: '09-30',
    cuts: [],
  },
  apple: {
    cropCode: 'apple-cherry-pear-active-cover-killing-frost',
    calendarCode: `apple-cherry-pear-active-cover-${ORCHARD_REGION}`,
    plantingDay: '03-28',
    harvestDay: null,
    cuts: [],
  },
  peach: {
    cropCode: 'peach-stone-fruit-no-cover-killing-frost',
    calendarCode: 'peach-stone-fruit-no-cover-killing-frost-low-latitudes-deciduous-orchard-row',
    plantingDay: '03-22',
    harvestDay: null,
    cuts: [],
  },
  grape: { cropCode: 'grape-wine', calendarCode: 'grape-wine-mid-latitudes', plantingDay: '04-18', harvestDay: null, cuts: [] },
  maize: { cropCode: 'maize-grain', calendarCode: 'maize-grain-spain-california', plantingDay: '04-30', harvestDay: null, cuts: [] },
  wheat: {
    cropCode: 'winter-wheat-frozen-soils',
    calendarCode: 'winter-wheat-frozen-soils-idaho',
    plantingDay: '10-04',
    autumn: true,
    harvestDay: '08-12',
    cuts: [],
  },
  'wheat-double': {
    cropCode: 'winter-wheat-non-frozen-soils',
    calendarCode: 'winter-wheat-non-frozen-soils-mediterranean',
    plantingDay: '10-08',
    autumn: true,
    harvestDay: '06-18',
    cuts: [],
  },
  beet: { cropCode: 'sugar-beet', calendarCode: 'sugar-beet-idaho', plantingDay: '04-10', harvestDay: null, cuts: [] },
  bean: { cropCode: 'bean-dry', calendarCode: 'bean-dry-idaho', plantingDay: '05-30', harvestDay: null, cuts: [] },
  onion: { cropCode: 'onion-dry', calendarCode: 'onion-dry-mediterranean', plantingDay: '04-04', harvestDay: null, cuts: [] },
  potato: { cropCode: 'potato', calendarCode: 'potato-idaho', plantingDay: '04-26', harvestDay: '09-24', cuts: [] },
  'sweet-maize': { cropCode: 'maize-sweet', calendarCode: 'maize-sweet-mediterranean', plantingDay: '06-24', harvestDay: null, cuts: [] },
  'green-bean': {
    cropCode: 'bean-green',
    calendarCode: 'bean-green-california-mediterranean',
    plantingDay: '06-24',
    harvestDay: null,
    cuts: [],
  },
  sudan: {
    cropCode: 'sudan-grass-hay',
    calendarCode: 'sudan-grass-hay-california-desert',
    plantingDay: '06-22',
    harvestDay: null,
    cuts: [75],
  },
};

const STANDING: readonly CropPlan[] = ['alfalfa', 'pasture', 'apple', 'peach', 'grape'];
/** What follows a crop in the next season. */
const FOLLOWS: Record<CropPlan, readonly CropPlan[]> = {
  alfalfa: ['maize', 'potato'],
  pasture: ['pasture'],
  apple: ['apple'],
  peach: ['peach'],
  grape: ['grape'],
  maize: ['wheat', 'bean', 'beet', 'maize'],
  wheat: ['beet', 'maize', 'alfalfa', 'potato'],
  'wheat-double': ['maize', 'onion'],
  beet: ['wheat', 'bean'],
  bean: ['wheat', 'wheat-double', 'maize'],
  onion: ['wheat', 'maize'],
  potato: ['wheat', 'wheat-double'],
};

/** Soil class by ground: silt loam on the bottom land, sandier up the benches and down the fans, heavy at the tail of the valley. */
export function soilAt(ground: { readonly along: number; readonly distance: number }, random: Random): string {
  const wander = ground.distance + 700 * Math.sin(ground.along / 2300) + 500 * (random() - 0.5);
  if (ground.along > 25500 && ground.distance < 900) return 'silt-clay-loam';
  if (wander < 950) return 'silt-loam';
  if (wander < 2500) return 'loam';
  return wander < 4300 ? 'sandy-loam' : 'loamy-sand';
}

export function firstCrop(ground: Ground, random: Random): CropPlan {
  const draw = random();
  if (ground.pivot) return pick(draw, { alfalfa: 0.4, maize: 0.3, potato: 0.15, wheat: 0.15 });
  if (ground.zone === 'bottom' && ground.hectares < 7)
    return pick(draw, { apple: 0.3, peach: 0.18, grape: 0.14, pasture: 0.16, onion: 0.1, alfalfa: 0.12 });
  if (ground.zone === 'bottom') return pick(draw, { pasture: 0.28, alfalfa: 0.34, maize: 0.16, apple: 0.1, onion: 0.06, bean: 0.06 });
  if (ground.soilCode === 'loamy-sand') return pick(draw, { alfalfa: 0.42, potato: 0.16, grape: 0.08, wheat: 0.2, maize: 0.14 });
  return pick(draw, {
    alfalfa: 0.33,
    maize: 0.18,
    wheat: 0.12,
    'wheat-double': 0.08,
    beet: 0.1,
    bean: 0.07,
    onion: 0.05,
    potato: 0.04,
    grape: 0.03,
  });
}

export function nextCrop(last: CropPlan, random: Random): CropPlan {
  if (STANDING.includes(last) && random() < (last === 'alfalfa' ? 0.82 : 1)) return last;
  const choices = FOLLOWS[last];
  return choices[Math.floor(random() * choices.length)];
}

function pick(draw: number, shares: Partial<Record<CropPlan, number>>): CropPlan {
  let left = draw;
  for (const [crop, share] of Object.entries(shares)) {
    left -= share;
    if (left < 0) return crop as CropPlan;
  }
  return Object.keys(shares)[0] as CropPlan;
}

export function methodFor(crop: CropPlan, ground: Ground, random: Random): string {
  const draw = random();
  if (ground.pivot) return 'pivot';
  if (crop === 'apple' || crop === 'peach') return draw < 0.55 ? 'drip' : 'set-sprinkler';
  if (crop === 'grape') return 'drip';
  if (crop === 'onion') return draw < 0.5 ? 'drip' : draw < 0.65 ? 'subsurface-drip' : 'furrow';
  if (crop === 'potato') return draw < 0.75 ? 'set-sprinkler' : 'furrow';
  if (crop === 'pasture') return draw < 0.7 ? 'border' : 'set-sprinkler';
  if (crop === 'alfalfa') return draw < 0.45 ? 'border' : draw < 0.8 ? 'set-sprinkler' : 'basin';
  return draw < 0.62 ? 'furrow' : draw < 0.85 ? 'set-sprinkler' : 'border';
}

/** Plantings of one parcel in one season (water year `year`), sown within twelve days of the custom. One in thirty is shared by two crops. */
export function plantingsOf(parcelCode: string, year: number, crop: CropPlan, random: Random): StagedPlanting[] {
  const shift = Math.round((random() - 0.5) * 24);
  const base = { parcelCode, year, shift, haste: Math.round(random() * 14) };
  const draw = random();
  if (crop === 'wheat-double') {
    const second = draw < 0.4 ? 'sweet-maize' : draw < 0.7 ? 'green-bean' : 'sudan';
    return [
      planting({ ...base, shift: Math.min(shift, 4) }, HABITS[crop], 1),
      planting({ ...base, shift: Math.max(shift, 0) }, HABITS[second], 2),
    ];
  }
  if (draw > 0.967 && crop !== 'maize') {
    const share = 0.5 + Math.round(random() * 4) / 20;
    const rest = Math.round((1 - share) * 100) / 100;
    return [planting(base, HABITS[crop], 1, share), planting(base, HABITS.maize, 2, rest)];
  }
  return [planting(base, HABITS[crop], 1)];
}

interface PlantingPlace {
  readonly parcelCode: string;
  readonly year: number;
  /** days from the customary day */
  readonly shift: number;
  /** days a cut is brought forward, from the customary */
  readonly haste: number;
}

function planting({ parcelCode, year, shift, haste }: PlantingPlace, habit: Habit, sequence: number, areaShare = 1): StagedPlanting {
  const customary = addDays(`${habit.autumn ? year - 1 : year}-${habit.plantingDay}`, shift);
  const first = `${year - 1}-10-01`;
  const plantingDate = customary < first ? first : customary;
  const harvest = habit.harvestDay === null ? null : `${year}-${habit.harvestDay}`;
  return {
    parcelCode,
    seasonCode: String(year),
    sequence,
    cropCode: habit.cropCode,
    calendarCode: habit.calendarCode,
    plantingDate,
    harvestDate: harvest,
    cutDates: habit.cuts.map((days) => addDays(plantingDate, days - haste)),
    areaShare,
  };
}
