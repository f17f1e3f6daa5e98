/** Leave-one-out figures kept beside the weather they were computed from. */
import { and, eq } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { interpolationCheck } from '../schema/weather.ts';

interface CheckKey {
  /** the sources and settings it was made for */
  readonly key: string;
  readonly fromDay: string;
  readonly toDay: string;
}

/** The kept figures of a set of sources and days, whatever they were computed from; null when there are none. */
export async function findInterpolationCheck(tx: Tx, districtId: string, { key, fromDay, toDay }: CheckKey) {
  const [row] = await tx
    .select()
    .from(interpolationCheck)
    .where(
      and(
        eq(interpolationCheck.districtId, districtId),
        eq(interpolationCheck.key, key),
        eq(interpolationCheck.fromDay, fromDay),
        eq(interpolationCheck.toDay, toDay),
      ),
    );
  return row ?? null;
}

/** Keeps figures in the place of earlier ones of the same sources and days. */
export async function saveInterpolationCheck(
  tx: Tx,
  districtId: string,
  key: CheckKey,
  made: { readonly inputSha256: string; readonly result: unknown },
): Promise<Date> {
  const values = { ...made, computedAt: new Date() };
  await tx
    .insert(interpolationCheck)
    .values({ districtId, ...key, ...values })
    .onConflictDoUpdate({
      target: [interpolationCheck.districtId, interpolationCheck.key, interpolationCheck.fromDay, interpolationCheck.toDay],
      set: values,
    });
  return values.computedAt;
}
