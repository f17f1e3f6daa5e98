/** Who belongs to which district, and which parcels a grower may see. */
import { and, asc, eq, sql } from 'drizzle-orm';
import type { Tx } from '../connect.ts';
import { user } from '../schema/auth.ts';
import { district, growerParcel, membership } from '../schema/district.ts';

export type Role = (typeof membership.$inferSelect)['role'];

/** Memberships of one person, oldest first. Seen with `asPerson`. */
export function listMemberships(tx: Tx, userId: string) {
  return tx
    .select({ districtId: membership.districtId, role: membership.role })
    .from(membership)
    .where(eq(membership.userId, userId))
    .orderBy(asc(membership.createdAt), asc(membership.districtId));
}

export async function findDistrictHead(tx: Tx, districtId: string) {
  const [row] = await tx
    .select({
      code: district.code,
      name: district.name,
      timeZone: district.timeZone,
      invented: district.invented,
      weekStart: district.weekStart,
      units: district.units,
    })
    .from(district)
    .where(eq(district.districtId, districtId));
  return row ?? null;
}

export async function listGrowerParcels(tx: Tx, districtId: string, userId: string): Promise<string[]> {
  const rows = await tx
    .select({ code: growerParcel.parcelCode })
    .from(growerParcel)
    .where(and(eq(growerParcel.districtId, districtId), eq(growerParcel.userId, userId)))
    .orderBy(asc(growerParcel.parcelCode));
  return rows.map((row) => row.code);
}

/** Members of a district with their names and, for growers, their parcels. */
export async function listMembers(tx: Tx, districtId: string) {
  const members = await tx
    .select({ userId: membership.userId, role: membership.role, name: user.name, email: user.email })
    .from(membership)
    .innerJoin(user, eq(user.id, membership.userId))
    .where(eq(membership.districtId, districtId))
    .orderBy(asc(user.name), asc(user.email));
  const parcels = await tx.select().from(growerParcel).where(eq(growerParcel.districtId, districtId)).orderBy(asc(growerParcel.parcelCode));
  return members.map((member) => ({ ...member, parcels: parcels.filter((p) => p.userId === member.userId).map((p) => p.parcelCode) }));
}

/** Makes a person a member, or changes the role and parcels of one who is. */
export async function saveMembership(
  tx: Tx,
  districtId: string,
  member: { userId: string; role: Role; parcels?: readonly string[] },
): Promise<void> {
  await tx
    .insert(membership)
    .values({ districtId, userId: member.userId, role: member.role })
    .onConflictDoUpdate({ target: [membership.districtId, membership.userId], set: { role: member.role } });
  await tx.delete(growerParcel).where(and(eq(growerParcel.districtId, districtId), eq(growerParcel.userId, member.userId)));
  const rows = [...new Set(member.parcels ?? [])].map((parcelCode) => ({ districtId, userId: member.userId, parcelCode }));
  if (rows.length > 0) await tx.insert(growerParcel).values(rows);
}

export async function deleteMembership(tx: Tx, districtId: string, userId: string): Promise<boolean> {
  await tx.delete(growerParcel).where(and(eq(growerParcel.districtId, districtId), eq(growerParcel.userId, userId)));
  const rows = await tx
    .delete(membership)
    .where(and(eq(membership.districtId, districtId), eq(membership.userId, userId)))
    .returning({ userId: membership.userId });
  return rows.length > 0;
}

/** Locks the managers of a district against a change by another at the same moment, and answers their ids. */
export async function lockManagers(tx: Tx, districtId: string): Promise<string[]> {
  const rows = await tx.execute<{ user_id: string }>(
    sql`select user_id from membership where district_id = ${districtId} and role = 'manager' order by user_id for update`,
  );
  return rows.map((row) => row.user_id);
}
