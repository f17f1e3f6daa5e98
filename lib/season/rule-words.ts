/** Calendars that follow the weather, in words. */
import type { CropCalendar, StartRule, ThermalStages } from './types.ts';

/** A start rule in words. @example ruleWords({ kind: 'frost-free', threshold: 0, latest: 90 }) // 'day after the last minimum below 0 °C' */
export function ruleWords(rule: StartRule): string {
  switch (rule.kind) {
    case 'air-temperature':
    case 'soil-temperature': {
      const where = rule.kind === 'soil-temperature' ? 'estimated soil temperature' : 'air temperature';
      return `mean ${where} of ${rule.days} days ${rule.falling ? 'falls to' : 'reaches'} ${rule.threshold} °C`;
    }
    case 'rain':
      return `${rule.depth} mm of rain within ${rule.days} days`;
    case 'frost-free':
      return `day after the last minimum below ${rule.threshold} °C`;
    default:
      return `${rule.sum} °C d above ${rule.base} °C since the earliest day`;
  }
}

/** Stage sums in words. */
export function thermalWords({ base, ceiling, initial, development, mid, late }: ThermalStages): string {
  return `${initial}, ${development}, ${mid} and ${late} °C d above ${base} °C, temperatures held below ${ceiling} °C`;
}

/** What of a calendar the weather decides, a sentence each; none for a calendar of fixed days. */
export function calendarWords({ start, thermal, laterThermal, killingFrost }: CropCalendar): string[] {
  const offset = start?.offset ? `, ${Math.abs(start.offset)} d ${start.offset < 0 ? 'before' : 'after'} that day` : '';
  return [
    ...(start ? [`Starts when: ${ruleWords(start)}${offset}; at the latest ${start.latest} d after the planting date.`] : []),
    ...(thermal ? [`Stages by thermal time: ${thermalWords(thermal)}.`] : []),
    ...(laterThermal ? [`After a cut: ${thermalWords(laterThermal)}.`] : []),
    ...(killingFrost
      ? [
          `Ends at ${killingFrost.threshold} °C or below, ${killingFrost.notBefore} d or more after the start${killingFrost.after ? `, and ${killingFrost.after} d later` : ''}.`,
        ]
      : []),
  ];
}
