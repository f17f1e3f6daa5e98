/** The time zones that the service itself knows, UTC among them: what it accepts is what it offers. */
export function knownTimeZones(): string[] {
  return [...new Set(['UTC', ...Intl.supportedValuesOf('timeZone')])];
}
