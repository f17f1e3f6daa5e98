/** The rule for missing values in lib/crop: NaN in gives NaN out, except where a docstring says otherwise. */
import { describe, expect, test } from 'vitest';
import { mostCapillaryRise } from '../../lib/crop/capillary-rise.ts';
import {
  adjustedCoefficient,
  climateTerm,
  heightFactor,
  relativeHumidityMinimum,
  tallToShortRatio,
} from '../../lib/crop/climate-adjustment.ts';
import { coefficientMaximum, exposedWettedFraction, fractionCovered } from '../../lib/crop/cover.ts';
import { effectiveRainOfMonth, simpleEffectiveRainOfMonth, storageFactor } from '../../lib/crop/effective-rain.ts';
import { frozenGroundIndex } from '../../lib/crop/frozen-ground.ts';
import {
  depletionFraction,
  drainage,
  movedDepletion,
  refilledDepletion,
  stressCoefficient,
  totalAvailableWater,
} from '../../lib/crop/root-zone.ts';
import {
  curveNumberOfSurface,
  curveNumbers,
  potentialRetention,
  retentionAtLowAbstraction,
  surfaceRunoff,
  surfaceRunoffAtLowAbstraction,
} from '../../lib/crop/runoff.ts';
import {
  combinedStress,
  depthWithLeaching,
  leachingRequirement,
  relativeYieldInSalt,
  saltStress,
  steadySoilSalinity,
} from '../../lib/crop/salinity.ts';
import { degreeDayMelt, snowShare } from '../../lib/crop/snow.ts';
import { driedSurfaceDepletion, evaporationReduction, totalEvaporableWater, wettedSurfaceDepletion } from '../../lib/crop/surface-layer.ts';
import { relativeYield, stressFromRelativeYield } from '../../lib/crop/yield-response.ts';

const FUNCTIONS: [string, (...args: number[]) => number, number[]][] = [
  ['relativeHumidityMinimum', relativeHumidityMinimum, [1, 2]],
  ['climateTerm', climateTerm, [2, 45]],
  ['heightFactor', heightFactor, [1]],
  ['tallToShortRatio', tallToShortRatio, [2, 45]],
  ['coefficientMaximum', coefficientMaximum, [0.9, 0.1, 0.7]],
  ['fractionCovered', fractionCovered, [0.9, 1.2, 1]],
  ['exposedWettedFraction', (covered, wetted) => exposedWettedFraction(covered, wetted, true), [0.4, 0.5]],
  ['totalAvailableWater', totalAvailableWater, [0.3, 0.1, 1]],
  ['depletionFraction', depletionFraction, [0.5, 5]],
  ['stressCoefficient', stressCoefficient, [130, 160, 0.4]],
  ['refilledDepletion', refilledDepletion, [30, 5, 5]],
  ['drainage', drainage, [3, 5, 5]],
  ['movedDepletion', movedDepletion, [40, 0.8, 0.2]],
  ['potentialRetention', potentialRetention, [80]],
  ['surfaceRunoff', surfaceRunoff, [60, 60]],
  ['retentionAtLowAbstraction', retentionAtLowAbstraction, [60]],
  ['surfaceRunoffAtLowAbstraction', surfaceRunoffAtLowAbstraction, [60, 60]],
  ['curveNumbers', (curveNumber) => curveNumbers(curveNumber).wet, [80]],
  [
    'curveNumberOfSurface',
    (dry, wet, ...layer) => curveNumberOfSurface({ dry, average: 78, wet }, layer[0], layer[1], layer[2]),
    [60, 90, 7, 8, 20],
  ],
  ['snowShare', snowShare, [1]],
  ['degreeDayMelt', degreeDayMelt, [20, 5]],
  ['frozenGroundIndex', frozenGroundIndex, [50, -5, 10]],
  ['relativeYieldInSalt', (soil, threshold, slope) => relativeYieldInSalt(soil, { threshold, slope }), [4, 1.7, 12]],
  ['saltStress', (soil, threshold, slope, response) => saltStress(soil, { threshold, slope }, response), [4, 1.7, 12, 1.25]],
  ['combinedStress', combinedStress, [0.8, 0.9]],
  ['leachingRequirement', leachingRequirement, [1.2, 1.7]],
  ['depthWithLeaching', depthWithLeaching, [100, 0.1]],
  ['steadySoilSalinity', steadySoilSalinity, [1, 0.2]],
  [
    'mostCapillaryRise',
    (conductivity, bubblingHead, exponent, height) => mostCapillaryRise({ conductivity, bubblingHead, exponent }, height),
    [300, 0.1, 5, 1],
  ],
  ['storageFactor', storageFactor, [76]],
  ['effectiveRainOfMonth', effectiveRainOfMonth, [100, 150, 75]],
  ['simpleEffectiveRainOfMonth', simpleEffectiveRainOfMonth, [100]],
  ['totalEvaporableWater', totalEvaporableWater, [0.3, 0.1, 0.1]],
  ['evaporationReduction', evaporationReduction, [14, 8, 20]],
  ['wettedSurfaceDepletion', wettedSurfaceDepletion, [18, 4, 4, 0.5]],
  ['driedSurfaceDepletion', driedSurfaceDepletion, [5, 4, 0.5, 18]],
  ['relativeYield', relativeYield, [1.2, 80, 100]],
  ['stressFromRelativeYield', stressFromRelativeYield, [1.2, 0.8]],
];

describe('missing values', () => {
  test.each(FUNCTIONS)('%s', (_, evaluate, good) => {
    expect(Number.isFinite(evaluate(...good))).toBe(true);
    for (let k = 0; k < good.length; k++) expect(evaluate(...good.with(k, Number.NaN)), `argument ${k + 1}`).toBeNaN();
  });

  test('a stage without weather keeps its table coefficient', () => {
    expect(adjustedCoefficient(1.15, Number.NaN, Number.NaN, 1)).toBe(1.15);
  });
});
