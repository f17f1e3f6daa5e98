/** Documents of a run as files. */

import type { Caller } from '../access/caller.ts';
import type { PeriodKind } from '../base/civil-date.ts';
import { Conflict } from '../base/errors.ts';
import type { UnitSystem } from '../base/units.ts';
import { pdfReport } from '../files/pdf-report.ts';
import { answerDistrictReport } from './answers/district-report.ts';
import { parcelsAsGeoJson, textStream } from './answers/report.ts';
import { answerRun } from './answers/run.ts';
import { eachRunParcels } from './answers/run-parcels.ts';
import { answerReaches } from './answers/run-reaches.ts';
import { answerSummary } from './answers/summary.ts';
import { type ParcelPeriod, parcelPeriod, reachPeriod, summaryRow, summaryRowsOf } from './contract/run.ts';
import { begun, csvOf, csvResponse, csvStream } from './table.ts';

interface ReportWanted {
  readonly file: 'parcels.csv' | 'parcels.geojson' | 'reaches.csv' | 'summary.csv' | 'district.pdf';
  readonly period: PeriodKind;
  readonly units: UnitSystem;
}

/** The document as a response with a file name of district, season and kind. */
export async function writeReport(caller: Caller, runId: string, wanted: ReportWanted): Promise<Response> {
  const run = await answerRun(caller, runId);
  if (run.state !== 'done') throw new Conflict(`run ${runId} has no results: it is ${run.state}`);
  const name = `${caller.district.code}-${run.season}-${wanted.file.split('.')[0]}`.replace(/[^\w.-]+/g, '-');
  const { period, units } = wanted;
  switch (wanted.file) {
    case 'parcels.csv': {
      const pages = await begun(eachRunParcels(caller, runId, { period }));
      return csvResponse(csvStream({ row: parcelPeriod }, pages as AsyncGenerator<ParcelPeriod[]>, units), name);
    }
    case 'reaches.csv':
      return csvResponse(csvOf({ row: reachPeriod }, (await answerReaches(caller, runId, { period })).items, units), name);
    case 'summary.csv':
      return csvResponse(csvOf({ row: summaryRow }, summaryRowsOf(await answerSummary(caller, runId)), units), name);
    case 'parcels.geojson': {
      const pieces = await begun(parcelsAsGeoJson(caller, runId, { period: 'season' }, units));
      return fileResponse(textStream(pieces), `${name}.geojson`, 'application/geo+json');
    }
    case 'district.pdf': {
      const report = await answerDistrictReport(caller, runId, { units, made: todayIn(caller.district.timeZone) });
      return fileResponse(new Uint8Array(await pdfReport(report)), `${name}.pdf`, 'application/pdf');
    }
  }
}

function fileResponse(body: ReadableStream<Uint8Array> | Uint8Array<ArrayBuffer>, name: string, type: string): Response {
  return new Response(body, {
    headers: { 'content-type': type, 'content-disposition': `attachment; filename="${name}"`, 'cache-control': 'private, no-cache' },
  });
}

/** Today's civil date in a time zone. */
function todayIn(timeZone: string): string {
  return new Intl.DateTimeFormat('en-CA', { timeZone, dateStyle: 'short' }).format(new Date());
}
