/** What was decided on the stamps of a file with several readings a day, told once and not per site. */
import { isoDate } from '../base/civil-date.ts';
import { counted } from '../base/counted.ts';
import type { FindingList } from './finding-list.ts';
import type { ImportOptions } from './reading.ts';
import type { ClockReading, StampClock } from './weather-clock.ts';
import type { ReadingStore } from './weather-readings.ts';

const MINUTES_PER_DAY = 1440;
/** A step back in time of a site beyond this is a jump [min]. */
const JUMP = 31 * MINUTES_PER_DAY;

interface Batch {
  readonly stores: readonly ReadingStore[];
  readonly clock: StampClock;
}

export class ClockNotes {
  private readonly ways = new Map<string, { how: ClockReading['how']; zone: string | null; sites: string[] }>();
  private skipped = 0;
  private twice = 0;
  private firstSkipped: { stamp: number; line: number } | null = null;
  private back = 0;
  private jumps: { site: string; from: number; to: number; line: number }[] = [];

  constructor(
    private readonly batch: Batch,
    private readonly siteCodes: readonly string[],
  ) {}

  /** Takes in how one site's stamps, in file order, were read. */
  add(site: number, zone: string | null, clock: ClockReading, stamps: Float64Array, lines: Int32Array): void {
    const key = `${clock.how} ${zone}`;
    const way = this.ways.get(key) ?? { how: clock.how, zone, sites: [] };
    way.sites.push(this.siteCodes[site]);
    this.ways.set(key, way);
    this.skipped += clock.skipped;
    this.twice += clock.twice;
    if (clock.skipped > 0 && this.firstSkipped === null) {
      this.firstSkipped = { stamp: clock.firstSkipped, line: lines[stamps.indexOf(clock.firstSkipped)] };
    }
    for (let i = 1; i < stamps.length; i++) {
      if (stamps[i] < stamps[i - 1]) this.back++;
      if (Math.abs(stamps[i] - stamps[i - 1]) > JUMP) {
        this.jumps.push({ site: this.siteCodes[site], from: stamps[i - 1], to: stamps[i], line: lines[i] });
      }
    }
  }

  tell(findings: FindingList, options: ImportOptions): void {
    for (const way of this.ways.values()) this.tellWay(way, findings, options);
    this.tellSkipped(findings);
    this.tellOrder(findings);
  }

  private tellWay(
    { how, zone, sites }: { how: ClockReading['how']; zone: string | null; sites: readonly string[] },
    findings: FindingList,
    options: ImportOptions,
  ): void {
    const { clock, stores } = this.batch;
    const { file } = stores[0];
    const whose = `${sites.slice(0, 5).join(', ')}${sites.length > 5 ? ' …' : ''}`;
    const advice = 'Choose the zone of the stamps in the options, an IANA name or a fixed offset such as UTC-07:00.';
    const standard = `A day of weather runs by the standard time of ${zone ?? 'the site'}, 24 hours all year.`;
    if (how === 'moved' && clock.kind === 'fixed') {
      findings.note({
        code: 'clock',
        message: `Stamps are ${clock.name} (${clock.by}) and are moved to the site's day (${whose}). ${standard}`,
        file,
      });
    } else if (how === 'wall') {
      const twice =
        this.twice > 0
          ? ` ${counted(this.twice, 'reading falls', 'readings fall')} in the hour that occurs twice: the first in the file is taken as daylight time, the second as standard time.`
          : '';
      const by = clock.kind === 'wall' ? 'as chosen' : 'the record leaves out the hour that the clock skips, or has one twice';
      findings.note({
        code: 'daylight-saving',
        message: `Stamps follow daylight saving of ${clock.kind === 'wall' ? clock.zone : zone} (${by}) and are moved to standard time (${whose}).${twice} ${standard}`,
        file,
      });
    } else if (how === 'standard') {
      const by = clock.kind === 'standard' ? clock.by : 'the record shows no daylight saving';
      findings.note({ code: 'clock', message: `Stamps are local standard time (${whose}; ${by}).`, file });
    } else if (how === 'standard-assumed') {
      findings.warn({
        code: 'clock-assumed',
        message: `Nothing says whether the stamps follow daylight saving of ${zone}, and no hour of the record tells: they are taken as standard time (${whose}). If they do follow it, summer readings lie one hour off.`,
        file,
        advice,
      });
    } else if (how === 'no-zone') {
      const said =
        clock.kind === 'fixed'
          ? `Stamps are ${clock.name}, and neither site nor district names a zone: days are cut at midnight of ${clock.name}`
          : 'Neither file, site nor district names a zone: stamps are taken as local standard time';
      findings.warn({
        code: 'clock-assumed',
        message: `${said} (${whose}).`,
        file,
        advice: options.stampZone ? 'Give the sites a zone.' : advice,
      });
    }
  }

  private tellSkipped(findings: FindingList): void {
    if (this.skipped === 0 || this.firstSkipped === null) return;
    const { clock, stores } = this.batch;
    const zone = clock.kind === 'wall' ? clock.zone : 'the zone';
    findings.error({
      code: 'clock-skipped',
      message: `${counted(this.skipped, 'reading stands', 'readings stand')} at a time that the clock of ${zone} skips when it is put forward, the first at ${timeText(this.firstSkipped.stamp)}; they are left out.`,
      file: stores[0].file,
      row: this.firstSkipped.line,
      value: timeText(this.firstSkipped.stamp),
      advice: 'The station’s clock does not follow daylight saving: choose a fixed offset such as UTC+01:00 as zone of the stamps.',
    });
  }

  private tellOrder(findings: FindingList): void {
    const { file } = this.batch.stores[0];
    if (this.back > 0) {
      findings.note({
        code: 'rows-not-in-order',
        message: `${counted(this.back, 'reading steps', 'readings step')} back in time; each is stored under its own time.`,
        file,
      });
    }
    const back = this.jumps.filter(({ from, to }) => to < from);
    if (back.length === 0) return;
    const first = back[0];
    findings.warn({
      code: 'year-jump',
      message: `Site ${first.site}: the readings jump back by more than a month ${counted(back.length, 'time', 'times')}, first from ${timeText(first.from)} to ${timeText(first.to)}. Months of different years put together, a typical year, are not a record of days.`,
      file,
      row: first.line,
      value: timeText(first.to),
      advice: 'Use a typical year to try things out, not as the weather of a season.',
    });
  }
}

/** @example timeText(90) // '1970-01-01 01:30' */
export function timeText(minute: number): string {
  const day = Math.floor(minute / MINUTES_PER_DAY);
  const within = Math.floor(minute - day * MINUTES_PER_DAY);
  return `${isoDate(day)} ${String(Math.floor(within / 60)).padStart(2, '0')}:${String(within % 60).padStart(2, '0')}`;
}
