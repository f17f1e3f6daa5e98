/** Twelve invented parcels on three reaches with round numbers, for reports. */
import type { DistrictReportInput } from '../../lib/report/district-report.ts';
import type { ParcelPeriodRow } from '../../lib/report/parcel-period-row.ts';
import type { ReachPeriodRow } from '../../lib/report/reach-period-row.ts';

const SEASON = { name: 'Season 2024', start: '2024-04-01', end: '2024-04-30' } as const;

/** Parcel i of 10 + i ha needs 100 + 50 i mm gross; the last has no result. */
export function parcelRows(): ParcelPeriodRow[] {
  return Array.from({ length: 12 }, (_, i) => {
    const known = i < 11;
    const gross = known ? 100 + 50 * i : Number.NaN;
    const area = (10 + i) * 10_000;
    return {
      parcel: `P${i + 1}`,
      turnout: `T${Math.floor(i / 3) + 1}`,
      reach: i < 6 ? 'L1' : 'L2',
      crops: i % 2 === 0 ? ['Alfalfa hay'] : ['Winter wheat', 'Maize, sweet'],
      method: i % 3 === 0 ? 'Drip' : 'Furrow',
      soil: 'loam',
      area,
      start: SEASON.start,
      end: SEASON.end,
      referenceEt: known ? 150 : Number.NaN,
      cropEt: gross * 0.8,
      adjustedCropEt: gross * 0.75,
      precipitation: known ? 20 : Number.NaN,
      effectivePrecipitation: known ? 12.345 : Number.NaN,
      netRequirement: gross * 0.6,
      grossRequirement: gross,
      deepPercolation: known ? 3 : Number.NaN,
      rootZoneDepletion: known ? 41.5 : Number.NaN,
      stressCoefficient: known ? 0.98765 : Number.NaN,
      grossVolume: (gross * area) / 1000,
    };
  });
}

export function reachRows(): ReachPeriodRow[] {
  const base = { start: SEASON.start, end: SEASON.end, meanFlow: 0.25, meanShare: 0.25 };
  return [
    {
      ...base,
      reach: 'M',
      name: 'Main',
      parent: null,
      kind: 'main',
      turnoutDemand: 0,
      demandBelow: 600_000,
      loss: 60_000,
      headInflow: 750_000,
      peakFlow: 1.1,
      busiestFlow: 1.1,
      capacity: 1,
      capacityShare: 1.1,
      status: 'over',
    },
    {
      ...base,
      reach: 'L1',
      name: '=Lateral "one"',
      parent: 'M',
      kind: 'lateral',
      turnoutDemand: 200_000,
      demandBelow: 200_000,
      loss: 40_000,
      headInflow: 240_000,
      peakFlow: 0.46,
      busiestFlow: 0.46,
      capacity: 0.5,
      capacityShare: 0.92,
      status: 'tight',
    },
    {
      ...base,
      reach: 'L2',
      name: 'Lateral two',
      parent: 'M',
      kind: 'lateral',
      turnoutDemand: 400_000,
      demandBelow: 400_000,
      loss: 50_000,
      headInflow: 450_000,
      peakFlow: 0.64,
      busiestFlow: 0.64,
      capacity: Number.NaN,
      capacityShare: Number.NaN,
      meanShare: Number.NaN,
      status: null,
    },
  ];
}

export function reportInput(units: 'metric' | 'us', rows = 1): DistrictReportInput {
  const shapes = parcelRows().map((_, i) => {
    const [west, south] = [-115 + (i % 4) * 0.01, 38 + Math.floor(i / 4) * 0.01];
    return [
      [
        [
          [west, south],
          [west + 0.009, south],
          [west + 0.009, south + 0.009],
          [west, south + 0.009],
          [west, south],
        ],
      ],
    ];
  });
  const line = [
    [-115.01, 38.03],
    [-115, 38.03],
    [-114.96, 38.031],
  ];
  return {
    district: { name: 'Test Bench District', invented: true },
    season: SEASON,
    units,
    made: '2024-05-02',
    run: 'abc123',
    parcels: parcelRows(),
    shapes,
    canals: Array.from({ length: rows }, () => reachRows())
      .flat()
      .map((row) => ({ lines: [line], row })),
    weeks: [
      { start: '2024-04-01', end: '2024-04-07', volume: 100_000, low: 90_000, high: 120_000 },
      { start: '2024-04-08', end: '2024-04-14', volume: 200_000 },
      { start: '2024-04-15', end: '2024-04-21', volume: Number.NaN },
      { start: '2024-04-22', end: '2024-04-30', volume: 50_000, forecast: true },
    ],
    method: ['Made for a test.'],
    classMethod: 'quantile',
  };
}
