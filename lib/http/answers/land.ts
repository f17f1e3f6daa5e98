/** Parcels, plantings, canals and the libraries of the district. */
import { z } from 'zod';
import {
  countParcels,
  countPlantings,
  findParcel,
  listCalendars,
  listCanals,
  listCrops,
  listParcels,
  listPlantings,
  listSoils,
} from '../../../db/queries/land-read.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import { NotFound } from '../../base/errors.ts';
import { roundOrNull } from '../../base/missing.ts';
import { buildTree } from '../../canal/tree.ts';
import type { CanalAnswer, CropAnswer, ParcelAnswer, PlantingAnswer, SoilAnswer } from '../contract/rest.ts';
import { readCursor, writeCursor } from '../paging.ts';
import { isStorable } from '../storable-text.ts';
import { practiceMembers } from './practice.ts';

export interface PageWanted {
  readonly limit: number;
  readonly cursor?: string;
}
export interface Page<T> {
  items: T[];
  next_cursor: string | null;
  total: number;
}

export async function answerParcels(caller: Caller, wanted: PageWanted & { search?: string }): Promise<Page<ParcelAnswer>> {
  const after = readCursor(wanted.cursor, z.tuple([z.string()]));
  const filter = { districtId: caller.districtId, codes: caller.parcels, search: wanted.search };
  return database().inDistrict(caller.districtId, async (tx) => {
    const rows = await listParcels(tx, filter, after?.[0] ?? null, wanted.limit + 1);
    const page = rows.slice(0, wanted.limit);
    return {
      items: page.map(parcelMembers),
      next_cursor: rows.length > page.length ? writeCursor(page[page.length - 1].code) : null,
      total: await countParcels(tx, filter),
    };
  });
}

type ParcelRow = Awaited<ReturnType<typeof listParcels>>[number];

function parcelMembers(row: ParcelRow): ParcelAnswer {
  return {
    code: row.code,
    name: row.name,
    turnout: row.turnoutCode,
    reach: row.reachCode,
    soil: row.soilCode,
    soil_shares: row.soilShares?.map(({ soil, share }) => ({ soil, share })) ?? null,
    method: row.methodCode,
    area_ha: roundOrNull(row.area / 1e4, 6) ?? 0,
    elevation_m: row.elevation,
    longitude: row.longitude,
    latitude: row.latitude,
    crops: row.crops,
  };
}

/** @throws {NotFound} also for a parcel that the caller may not see. */
export async function answerParcel(caller: Caller, code: string): Promise<ParcelAnswer> {
  const visible = isStorable(code) && (!caller.parcels || caller.parcels.includes(code));
  const row = visible ? await database().inDistrict(caller.districtId, (tx) => findParcel(tx, caller.districtId, code)) : null;
  if (!row) throw new NotFound(`no parcel "${code}" in this district`);
  return parcelMembers(row);
}

export async function answerPlantings(
  caller: Caller,
  wanted: PageWanted & { season?: string; parcel?: string },
): Promise<Page<PlantingAnswer>> {
  const after = readCursor(wanted.cursor, z.tuple([z.string(), z.string(), z.number()]));
  const filter = { districtId: caller.districtId, codes: caller.parcels, season: wanted.season, parcel: wanted.parcel };
  return database().inDistrict(caller.districtId, async (tx) => {
    const rows = await listPlantings(tx, filter, after, wanted.limit + 1);
    const page = rows.slice(0, wanted.limit);
    const last = page[page.length - 1];
    return {
      items: page.map(plantingMembers),
      next_cursor: rows.length > page.length ? writeCursor(last.seasonCode, last.parcelCode, last.sequence) : null,
      total: await countPlantings(tx, filter),
    };
  });
}

function plantingMembers(row: Awaited<ReturnType<typeof listPlantings>>[number]): PlantingAnswer {
  return {
    parcel: row.parcelCode,
    season: row.seasonCode,
    crop: row.cropCode,
    calendar: row.calendarCode,
    planting_date: row.plantingDate,
    harvest_date: row.harvestDate,
    cut_dates: row.cutDates,
    area_share: row.areaShare,
    practice: practiceMembers(row.practice),
  };
}

/** Reaches, each after the one that feeds it. */
export async function answerCanals(caller: Caller): Promise<CanalAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listCanals(tx, caller.districtId));
  if (rows.length === 0) return [];
  const tree = buildTree(rows);
  return Array.from(tree.order, (index) => ({
    reach: rows[index].code,
    name: rows[index].name,
    parent: rows[index].parentCode,
    level: tree.depth[index],
    kind: rows[index].kind,
    length_km: roundOrNull(rows[index].length / 1000, 4) ?? 0,
    capacity_m3_s: rows[index].capacity,
    loss_rule: rows[index].lossRule as Record<string, unknown>,
    turnout_count: rows[index].turnoutCount,
    parcel_count: rows[index].parcelCount,
  }));
}

export function answerCrops(caller: Caller): Promise<CropAnswer[]> {
  return readCrops(caller);
}

export async function answerCrop(caller: Caller, code: string): Promise<CropAnswer> {
  const [crop] = await readCrops(caller, code);
  if (!crop) throw new NotFound(`no crop "${code}" in this district`);
  return crop;
}

async function readCrops(caller: Caller, code?: string): Promise<CropAnswer[]> {
  return database().inDistrict(caller.districtId, async (tx) => {
    const crops = await listCrops(tx, caller.districtId, code);
    const calendars = await listCalendars(tx, caller.districtId, code);
    return crops.map((crop) => ({
      code: crop.code,
      name: crop.name,
      group: crop.group,
      definition: crop.definition as Record<string, unknown>,
      sources: crop.sources as Record<string, string>,
      notes: crop.notes,
      calendars: calendars.filter((calendar) => calendar.cropCode === crop.code).map(calendarMembers),
      planting_count: crop.plantingCount,
    }));
  });
}

function calendarMembers(row: Awaited<ReturnType<typeof listCalendars>>[number]): CropAnswer['calendars'][number] {
  return {
    code: row.code,
    name: row.name,
    planting_day: row.plantingDay,
    definition: row.definition as Record<string, unknown>,
    source: row.source,
  };
}

export async function answerSoils(caller: Caller): Promise<SoilAnswer[]> {
  const rows = await database().inDistrict(caller.districtId, (tx) => listSoils(tx, caller.districtId));
  return rows.map((row) => ({
    code: row.code,
    name: row.name,
    field_capacity_m3_m3: row.fieldCapacity,
    wilting_point_m3_m3: row.wiltingPoint,
    evaporation_depth_m: row.evaporationDepth,
    readily_evaporable_water_mm: row.readilyEvaporableWater,
    total_evaporable_water_mm: row.totalEvaporableWater,
    curve_number: row.curveNumber,
    root_limit_m: row.rootLimit,
    ...profileMembers(row.profile),
    source: row.source,
  }));
}

type SoilRow = Awaited<ReturnType<typeof listSoils>>[number];

function profileMembers({ layers, saturation, texture, percolationRate, capillary }: SoilRow['profile']) {
  return {
    saturation_m3_m3: saturation ?? null,
    texture: texture ?? ('medium' as const),
    percolation_mm_d: percolationRate ?? null,
    capillary: capillary
      ? {
          conductivity_mm_d: capillary.conductivity,
          bubbling_head_m: capillary.bubblingHead,
          exponent: roundOrNull(capillary.exponent, 4) ?? 0,
        }
      : null,
    layers: (layers ?? []).map((layer) => ({
      top_m: layer.top,
      bottom_m: layer.bottom,
      field_capacity_m3_m3: layer.fieldCapacity,
      wilting_point_m3_m3: layer.wiltingPoint,
    })),
  };
}
