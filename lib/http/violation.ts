/** What the database says when a row would break a rule. */

/** True for a broken unique key (SQLSTATE 23505), however deep the driver wrapped it. */
export function isUniqueViolation(error: unknown): boolean {
  for (let at = error as { code?: unknown; cause?: unknown } | undefined; at; at = at.cause as typeof at) {
    if (at.code === '23505') return true;
  }
  return false;
}
