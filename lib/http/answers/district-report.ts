/** The season of a district put together for its printed report. */
import type { MultiPolygon, Polygon } from 'geojson';
import { listMethods, listSoils } from '../../../db/queries/land-read.ts';
import { listRunGeometries } from '../../../db/queries/parcel-history.ts';
import { listRunParcelHeads } from '../../../db/queries/run-read.ts';
import { listReachShapes } from '../../../db/queries/tiles.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { nanFromNull } from '../../base/missing.ts';
import type { UnitSystem } from '../../base/units.ts';
import { capacityStatus } from '../../canal/reach-period.ts';
import { type DistrictReportInput, districtReport, type Report } from '../../report/district-report.ts';
import type { ParcelPeriod, ReachPeriod, RunAnswer } from '../contract/run.ts';
import { reportBand } from './report-band.ts';
import { answerRun } from './run.ts';
import { eachRunParcels } from './run-parcels.ts';
import { answerReaches } from './run-reaches.ts';
import { answerSummary } from './summary.ts';

type ParcelRow = DistrictReportInput['parcels'][number];
type ReachRow = DistrictReportInput['canals'][number]['row'];
type Shape = DistrictReportInput['shapes'][number];

/** @param made day on which the report is made, YYYY-MM-DD in the district's zone */
export async function answerDistrictReport(caller: Caller, runId: string, options: { units: UnitSystem; made: string }): Promise<Report> {
  const run = await answerRun(caller, runId);
  const periods: ParcelPeriod[] = [];
  for await (const page of eachRunParcels(caller, runId, { period: 'season' })) periods.push(...page);
  const [land, summary, reaches, band] = await Promise.all([
    readLand(caller, runId, periods),
    answerSummary(caller, runId),
    answerReaches(caller, runId, { period: 'season' }),
    reportBand(caller, runId, options.units),
  ]);
  return districtReport({
    district: caller.district,
    season: { name: run.season, start: run.start_date, end: run.end_date },
    units: options.units,
    made: options.made,
    run: runId,
    parcels: periods.map((row) => parcelRow(row, land.tables.get(row.parcel))),
    shapes: periods.map((row) => land.shapes.get(row.parcel) ?? []),
    canals: reaches.items.map((row) => ({ lines: land.lines.get(row.reach) ?? [], row: reachRow(row) })),
    weeks: summary.weeks.map(({ start, end, gross_volume_m3 }) => ({
      ...{ start, end, volume: nanFromNull(gross_volume_m3), ...band.weeks.get(start) },
      forecast: run.days_ahead?.first_ahead != null && end >= run.days_ahead.first_ahead,
    })),
    method: [...methodParagraphs(run), ...band.paragraphs],
    classMethod: 'quantile',
  });
}

interface Tables {
  readonly method: string;
  readonly soil: string;
}

async function readLand(caller: Caller, runId: string, rows: readonly ParcelPeriod[]) {
  const { districtId } = caller;
  return database().inDistrict(districtId, async (tx) => {
    const methods = new Map((await listMethods(tx, districtId)).map((row) => [row.code, row.name]));
    const soils = new Map((await listSoils(tx, districtId)).map((row) => [row.code, row.name]));
    const heads = await listRunParcelHeads(tx, { districtId, runId });
    const tables = heads.map((head): [string, Tables] => [
      head.code,
      { method: methods.get(head.methodCode) ?? head.methodCode, soil: soils.get(head.soilCode) ?? head.soilCode },
    ]);
    const codes = rows.map((row) => row.parcel);
    const shapes = await listRunGeometries(tx, districtId, runId, codes);
    const lines = await listReachShapes(tx, districtId);
    return {
      tables: new Map(tables),
      shapes: new Map(shapes.map((row) => [row.code, polygonsOf(row.geometry as Polygon | MultiPolygon)])),
      lines: new Map(lines.map((row) => [row.code, linesOf(row.geometry as { type: string; coordinates: unknown })])),
    };
  });
}

function polygonsOf(geometry: Polygon | MultiPolygon): Shape {
  return (geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates) as unknown as Shape;
}

function linesOf(geometry: { type: string; coordinates: unknown }): DistrictReportInput['canals'][number]['lines'] {
  return (geometry.type === 'LineString' ? [geometry.coordinates] : geometry.coordinates) as DistrictReportInput['canals'][number]['lines'];
}

function parcelRow(row: ParcelPeriod, tables: Tables | undefined): ParcelRow {
  return {
    parcel: row.parcel,
    turnout: row.turnout,
    reach: row.reach,
    crops: row.crops ? row.crops.split(' + ') : [],
    method: tables?.method ?? '',
    soil: tables?.soil ?? '',
    area: row.area_ha * 1e4,
    start: row.start,
    end: row.end,
    referenceEt: nanFromNull(row.reference_et_mm),
    cropEt: nanFromNull(row.crop_et_mm),
    adjustedCropEt: nanFromNull(row.adjusted_crop_et_mm),
    precipitation: nanFromNull(row.precipitation_mm),
    effectivePrecipitation: nanFromNull(row.effective_precipitation_mm),
    netRequirement: nanFromNull(row.net_requirement_mm),
    grossRequirement: nanFromNull(row.gross_requirement_mm),
    deepPercolation: nanFromNull(row.deep_percolation_mm),
    rootZoneDepletion: nanFromNull(row.root_zone_depletion_mm),
    stressCoefficient: nanFromNull(row.stress_coefficient),
    grossVolume: nanFromNull(row.gross_volume_m3),
  };
}

function reachRow(row: ReachPeriod): ReachRow {
  const capacity = nanFromNull(row.capacity_m3_s);
  const capacityShare = nanFromNull(row.capacity_share);
  const meanFlow = nanFromNull(row.mean_inflow_m3_s);
  return {
    reach: row.reach,
    name: row.name,
    parent: row.parent,
    kind: row.kind,
    start: row.start,
    end: row.end,
    turnoutDemand: nanFromNull(row.turnout_demand_m3),
    demandBelow: nanFromNull(row.demand_below_m3),
    loss: nanFromNull(row.reach_loss_m3),
    headInflow: nanFromNull(row.head_inflow_m3),
    meanFlow,
    peakFlow: nanFromNull(row.peak_inflow_m3_s),
    busiestFlow: nanFromNull(row.busiest_week_inflow_m3_s),
    capacity,
    capacityShare,
    meanShare: meanFlow / capacity,
    status: capacityStatus(capacityShare),
  };
}

/** What the figures rest on past the last observation, where they do. */
function aheadParagraphs({ days_ahead: ahead, warnings }: RunAnswer): string[] {
  if (!ahead?.first_ahead) return [];
  const told = warnings.filter((warning) => warning.includes(ahead.first_ahead as string) || warning.startsWith('The normals'));
  return [
    `${told.join(' ')} The last observation is of ${ahead.last_observed ?? 'no day'}. Figures of these days, and sums that hold them, will change as observations come in.`.trim(),
  ];
}

function methodParagraphs(run: RunAnswer): string[] {
  const { settings, balance } = run;
  const equation = settings.method === 'fao56' ? 'FAO-56 Eq. 6' : 'ASCE-EWRI 2005 Eq. 1';
  const weather = {
    nearest: 'the nearest site',
    bilinear: 'the four grid cells around it',
    kriging: 'up to eight sites by ordinary kriging',
    automatic: 'the sites around it, each variable by the method with the lowest leave-one-out error',
    'inverse-distance': `up to ${settings.maximum_sites} sites by inverse distance`,
  }[settings.interpolation ?? 'inverse-distance'];
  const residual =
    balance.max_residual_mm === undefined ? '' : ` The largest daily balance residual is ${balance.max_residual_mm.toExponential(1)} mm.`;
  return [
    `Reference ET of a short surface by ${equation}; weather of each parcel from ${weather}, temperature corrected for elevation.`,
    `Crop ET by the dual crop coefficient (FAO-56 chapters 7 and 8) with a daily soil-water balance of each parcel.${residual}`,
    ...aheadParagraphs(run),
    'Gross requirement is the net requirement over the application efficiency of the parcel; reach losses compound from the parcels up to the headworks.',
  ];
}
