/**
 * From chosen fields to series that can be read: units, packing, steps, combinations.
 */
import { saturationVapourPressure } from '../energy/humidity.ts';
import type { WeatherVariable } from '../weather/variable.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { Combination, RoleFields } from './grid-choice.ts';
import type { Field } from './grid-fields.ts';
import type { GridRole } from './grid-role-names.ts';
import { isWeatherRole, textAttribute } from './grid-roles.ts';
import { type FieldSample, type Growth, growthOf as growthIn, growthSeries, sampleField } from './grid-sample.ts';
import type { Series, SeriesInput } from './grid-series.ts';
import type { CellsOfFile } from './grid-slab.ts';
import { placeSteps, type Steps } from './grid-steps.ts';
import { type ChosenUnit, chooseUnit, type GridUnit, gridUnit } from './grid-units.ts';
import { isAmount, newTally, packingOf, stepLimits, unpackingOf } from './grid-unpack.ts';
import type { ZoneOffset } from './grid-zone.ts';
import type { ImportOptions } from './reading.ts';

/** Steps of an amount that grows may reach this multiple of a single step's limit. */
const GROWTH_LIMIT = 48;

/** A series with what the user is told about it. */
export interface PlannedSeries {
  readonly makes: WeatherVariable;
  readonly parts: readonly RoleFields[];
  readonly series: Series;
  readonly units: readonly ChosenUnit[];
  /** some values of each part as the file has them, unpacked */
  readonly samples: readonly (readonly string[])[];
}

export interface PlanQuestion {
  readonly options: ImportOptions;
  readonly findings: FindingList;
  readonly stampZone: ZoneOffset | null;
  readonly cellsOf: (field: Field) => CellsOfFile;
  readonly told: Set<string>;
}

/** Makes a combination ready for reading; null, with a finding, when its steps cannot be used. */
export async function planSeries({ makes, parts }: Combination, question: PlanQuestion): Promise<PlannedSeries | null> {
  if (!isWeatherRole(makes)) return null;
  const ordered = parts.map(byTime);
  const [main] = ordered;
  const steps = placeSteps(
    main.fields.map(timeOf),
    {
      label: main.label,
      amount: isAmount(main.role),
      moment: isMoment(main.fields[0]),
      options: question.options,
      stampZone: question.stampZone,
      told: question.told,
    },
    question.findings,
  );
  if (steps === null || steps.runs.length === 0) return null;
  const kept = ordered.filter((part) => part === main || sameTimes(main, part, question.findings));
  if (kept.length < ordered.length) return null;
  const inputs: SeriesInput[] = [];
  const units: ChosenUnit[] = [];
  const samples: (readonly string[])[] = [];
  for (const part of kept) {
    const sample = await sampleField(part.fields[0], question.cellsOf(part.fields[0]));
    const { input, unit } = await planInput(part, steps, sample, question);
    inputs.push(input);
    units.push(unit);
    samples.push(sample.texts);
  }
  noteMeanVector(makes, kept, steps, question.findings);
  return {
    makes,
    parts: kept,
    units,
    samples,
    series: {
      inputs,
      combine: combineOf(
        makes,
        kept.map(({ role }) => role),
      ),
      steps,
      dayFactor: steps.daily && isAmount(makes) ? 24 : 1,
    },
  };
}

function timeOf(field: Field) {
  return field.time ?? { stamps: new Float64Array(0), bounds: null, calendar: 'standard' as const, zoned: false, note: null };
}

function byTime(part: RoleFields): RoleFields {
  const start = (field: Field) => timeOf(field).stamps[0] ?? Number.POSITIVE_INFINITY;
  return { ...part, fields: [...part.fields].sort((a, b) => start(a) - start(b)) };
}

/** True for fields of single moments: the file says so. */
function isMoment({ variable }: Field): boolean {
  return (
    /time:\s*point/.test(textAttribute(variable.attributes, 'cell_methods')) ||
    textAttribute(variable.attributes, 'GRIB_stepType') === 'instant'
  );
}

/** Fields that are read together must have the same steps. */
function sameTimes(main: RoleFields, part: RoleFields, findings: FindingList): boolean {
  const same =
    part.fields.length === main.fields.length &&
    part.fields.every((field, i) => {
      const [a, b] = [timeOf(field).stamps, timeOf(main.fields[i]).stamps];
      return a.length === b.length && a.every((stamp, k) => stamp === b[k]);
    });
  if (!same) {
    findings.warn({
      code: 'steps-differ',
      message: `"${shown(main.label)}" and "${shown(part.label)}" belong together and have different steps; they are left out.`,
      column: part.label,
      advice: 'Bring both for the same times.',
    });
  }
  return same;
}

async function planInput(
  part: RoleFields,
  steps: Steps,
  sample: FieldSample,
  question: PlanQuestion,
): Promise<{ input: SeriesInput; unit: ChosenUnit }> {
  const { options, findings } = question;
  const [field] = part.fields;
  const planned = options.plan?.columns?.[part.label]?.unit;
  const asked = planned ? gridUnit(part.role, planned) : null;
  if (planned && !asked)
    findings.warn({
      code: 'unknown-unit',
      message: `The plan's unit "${shown(planned)}" of "${shown(part.label)}" is not known; the file's is used.`,
      column: part.label,
      value: shown(planned),
    });
  const text = textAttribute(field.variable.attributes, 'units');
  const unit = asked ? { unit: asked, assumed: null, confidence: 1 } : chooseUnit(part.role, text, sample.spread, steps.seconds);
  if (unit.assumed) {
    findings.warn({
      code: 'unit-assumed',
      message: `"${shown(part.label)}": ${unit.assumed}.`,
      file: field.file.name,
      column: part.label,
      value: shown(text),
      advice: 'Name the unit in the plan if it is another.',
    });
  }
  const growth = await growthOf(part, unit.unit, steps, question);
  const unpackings = part.fields.map((piece) => {
    const unpacking = unpackingOf(part.role, packingOf(piece.variable), unitOfPiece(part, piece, unit.unit), {
      seconds: steps.seconds,
      daily: steps.daily,
    });
    return growth === null ? unpacking : { ...unpacking, high: unpacking.high * GROWTH_LIMIT };
  });
  return { unit, input: { fields: part.fields, unpackings, tally: newTally(), growth } };
}

/** A later file may name another unit than the first. */
function unitOfPiece({ role, fields }: RoleFields, piece: Field, unit: GridUnit): GridUnit {
  const [first, own] = [fields[0], piece].map(({ variable }) => textAttribute(variable.attributes, 'units'));
  return own === first ? unit : (gridUnit(role, own) ?? unit);
}

async function growthOf(
  part: RoleFields,
  unit: GridUnit,
  steps: Steps,
  { cellsOf, findings }: PlanQuestion,
): Promise<SeriesInput['growth']> {
  if (steps.daily || unit.per !== 'step' || !isAmount(part.role)) return null;
  const [field] = part.fields;
  let found: Growth | null = null;
  for (const values of await growthSeries(field, cellsOf(field))) found ??= growthIn(values, steps.seconds);
  if (found === null) return null;
  findings.note({
    code: 'amount-since-start',
    message: `"${shown(part.label)}" grows through ${(found.period * steps.seconds) / 3600} hours and begins again: each step is the difference to the one before.`,
    file: field.file.name,
    column: part.label,
  });
  const seconds = found.period * steps.seconds;
  return { seconds, start: steps.from[0][found.start], high: stepLimits(part.role, false).high };
}

/** Puts the combined value in place of the first input's. Saturation: FAO-56 Eq. 11; of two extremes their mean, Eq. 12. */
function combineOf(makes: GridRole, roles: readonly GridRole[]): Series['combine'] {
  if (roles.length === 1) return null;
  if (makes === 'wind_speed_m_s') {
    return ([east, north]) => {
      for (let i = 0; i < east.length; i++) east[i] = Math.sqrt(east[i] * east[i] + north[i] * north[i]);
    };
  }
  return ([deficit, ...temperatures]) => {
    for (let i = 0; i < deficit.length; i++) {
      let saturation = 0;
      for (const temperature of temperatures) saturation += saturationVapourPressure(temperature[i]) / temperatures.length;
      deficit[i] = saturation - Math.min(saturation, deficit[i]);
    }
  };
}

function noteMeanVector(makes: GridRole, parts: readonly RoleFields[], steps: Steps, findings: FindingList): void {
  if (makes !== 'wind_speed_m_s' || parts.length < 2) return;
  const names = parts.map(({ label }) => label).join(' and ');
  findings.add({
    severity: steps.daily ? 'warning' : 'note',
    code: 'wind-from-components',
    message: `Wind speed is made of its components ${names}${steps.daily ? ': of daily means, which is less than the mean speed where the wind turns in a day' : ''}.`,
    advice: steps.daily ? 'Bring the daily mean of the speed, or hourly components, where there is one.' : undefined,
  });
}
