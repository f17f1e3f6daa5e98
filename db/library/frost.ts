/**
 * Critical temperatures of fruit buds by stage.
 *
 * Temperatures are in °F as printed: 30 minutes of exposure, 10 % and 90 % of the buds killed. Source: Washington State University tables as
 * reprinted by the extension services of Pennsylvania State and Utah State Universities. The thermal time at which a stage begins is recalled and
 * rough: an order of magnitude for one season, not a model of the variety.
 */
import { celsiusFromFahrenheit } from '../../lib/base/units.ts';
import type { BudStage } from '../../lib/energy/frost-stage.ts';

export const CRITICAL_SOURCE =
  'Washington State University, critical temperatures of fruit buds, as reprinted by Pennsylvania State and Utah State extension; 30 min of exposure';
export const STAGE_SOURCE =
  'thermal time above 6.1 °C (43 °F) from the first of January (south of the equator: July): order of the stages of apple as kept by extension services of the north-eastern United States (recalled), other fruits by their usual lead over it (common practice, no source)';

/** Base of the thermal time of buds [°C]: 43 °F. */
export const BUD_BASE = celsiusFromFahrenheit(43);

export interface BudStageRow extends BudStage {
  /** as printed [°F] */
  readonly tenthKilledPrinted: number;
  readonly mostKilledPrinted: number;
}

export interface CriticalTable {
  readonly code: string;
  readonly name: string;
  readonly stages: readonly BudStageRow[];
}

/** Name, °F at 10 % and 90 % kill, and degree days above 43 °F [°F d] at which the stage begins. */
type Printed = readonly [name: string, tenth: number, most: number, degreeDays: number];

const PRINTED: Readonly<Record<string, { name: string; stages: readonly Printed[] }>> = {
  apple: {
    name: 'Apple',
    stages: [
      ['Silver tip', 15, 2, 80],
      ['Green tip', 18, 10, 120],
      ['Half-inch green', 23, 15, 175],
      ['Tight cluster', 27, 21, 220],
      ['First pink', 28, 24, 290],
      ['Full pink', 28, 25, 330],
      ['Bloom and post bloom', 28, 25, 375],
    ],
  },
  peach: {
    name: 'Peach',
    stages: [
      ['First swelling', 18, 1, 60],
      ['Calyx green', 21, 5, 90],
      ['Calyx red', 23, 9, 125],
      ['First pink', 25, 15, 165],
      ['First bloom', 26, 21, 215],
      ['Full bloom', 27, 24, 255],
      ['Post bloom', 28, 25, 310],
    ],
  },
  pear: {
    name: 'Pear',
    stages: [
      ['Scales separating', 15, 0, 75],
      ['Buds exposed', 20, 6, 115],
      ['Tight cluster', 24, 15, 165],
      ['First white', 25, 19, 220],
      ['Full white', 26, 22, 260],
      ['First bloom', 27, 23, 295],
      ['Full bloom and post bloom', 28, 24, 325],
    ],
  },
  'sweet-cherry': {
    name: 'Sweet cherry',
    stages: [
      ['First swelling', 17, 5, 70],
      ['Side green', 22, 9, 110],
      ['Green tip', 25, 14, 145],
      ['Tight cluster', 26, 17, 185],
      ['Open cluster', 27, 21, 225],
      ['First white', 27, 24, 260],
      ['Bloom and post bloom', 28, 25, 295],
    ],
  },
  apricot: {
    name: 'Apricot',
    stages: [
      ['Full bloom', 27, 22, 200],
      ['Green fruit', 28, 25, 290],
    ],
  },
  plum: {
    name: 'Plum',
    stages: [
      ['Full bloom', 27, 23, 270],
      ['Fruit set', 28, 25, 340],
    ],
  },
};

/** Fahrenheit degree days in a Celsius degree day. */
const FAHRENHEIT_DEGREES = 1.8;

export const CRITICAL_TABLES: readonly CriticalTable[] = Object.entries(PRINTED).map(([code, { name, stages }]) => ({
  code,
  name,
  stages: stages.map(([stage, tenth, most, degreeDays]) => ({
    id: stage.toLowerCase().replaceAll(' ', '-'),
    name: stage,
    tenthKilledPrinted: tenth,
    mostKilledPrinted: most,
    tenthKilled: celsiusFromFahrenheit(tenth),
    mostKilled: celsiusFromFahrenheit(most),
    begins: degreeDays / FAHRENHEIT_DEGREES,
  })),
}));

/** @example findCriticalTable('apple')?.stages.length // 7 */
export function findCriticalTable(code: string): CriticalTable | undefined {
  return CRITICAL_TABLES.find((table) => table.code === code);
}
