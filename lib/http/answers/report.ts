/** Documents of a run: tables and shapes, written as the reader takes them. */
import { listRunGeometries } from '../../../db/queries/parcel-history.ts';
import type { Caller } from '../../access/caller.ts';
import { database } from '../../access/database.ts';
import type { UnitSystem } from '../../base/units.ts';
import { answerIn } from '../border-units.ts';
import type { ParcelPeriod } from '../contract/run.ts';
import type { SpanWanted } from './run.ts';
import { eachRunParcels } from './run-parcels.ts';

/** Parcels with their shapes and the season's requirement, RFC 7946, some parcels at a time. */
export async function* parcelsAsGeoJson(caller: Caller, runId: string, wanted: SpanWanted, units: UnitSystem): AsyncGenerator<string> {
  let separator = '';
  yield '{"type":"FeatureCollection","features":[';
  for await (const rows of eachRunParcels(caller, runId, wanted)) {
    const shapes = await readShapes(caller, runId, rows);
    for (const row of rows) {
      const feature = { type: 'Feature', id: row.parcel, geometry: shapes.get(row.parcel) ?? null, properties: answerIn(units, row) };
      yield `${separator}\n${JSON.stringify(feature)}`;
      separator = ',';
    }
  }
  yield '\n]}\n';
}

async function readShapes(caller: Caller, runId: string, rows: readonly ParcelPeriod[]): Promise<Map<string, unknown>> {
  const codes = rows.map((row) => row.parcel);
  const shapes = await database().inDistrict(caller.districtId, (tx) => listRunGeometries(tx, caller.districtId, runId, codes));
  return new Map(shapes.map((shape) => [shape.code, shape.geometry]));
}

/** Text pieces as a byte stream that asks for the next piece when the reader has taken the last. */
export function textStream(pieces: AsyncGenerator<string>): ReadableStream<Uint8Array> {
  const encoder = new TextEncoder();
  return new ReadableStream({
    async pull(controller) {
      const { value, done } = await pieces.next();
      if (done) controller.close();
      else controller.enqueue(encoder.encode(value));
    },
    async cancel() {
      await pieces.return(undefined);
    },
  });
}
