/** Clocks of places. Expected values are the public rules: the EU and the US change on the last Sunday of March, the second of March and so on. */
import { describe, expect, it } from 'vitest';
import { dayNumber } from '../../lib/base/civil-date.ts';
import { clockChanges, fixedOffset, isTimeZone, standardOffset, wallReading, zoneOffset } from '../../lib/base/time-zone.ts';

const at = (date: string, hour: number, minute = 0) => dayNumber(date) * 1440 + hour * 60 + minute;

describe('offsets', () => {
  it('are read from texts', () => {
    expect(['UTC', 'Z', 'UTC-07:00', 'GMT+1', '+05:30', 'utc+0930', '−03:30'].map(fixedOffset)).toEqual([0, 0, -420, 60, 330, 570, -210]);
    expect(['UTC+15', '+01:75', 'Europe/Rome', 'noon', ''].map(fixedOffset)).toEqual([null, null, null, null, null]);
    expect([isTimeZone('America/Boise'), isTimeZone('UTC+2'), isTimeZone('Mars/Olympus')]).toEqual([true, true, false]);
  });

  it('of a zone follow its rules; standard time is that of winter on both hemispheres', () => {
    expect(zoneOffset('Asia/Kolkata', 0)).toBe(330);
    expect(zoneOffset('Europe/Madrid', at('2024-07-01', 12))).toBe(120);
    expect(zoneOffset('no such zone', 0)).toBeNaN();
    expect([
      standardOffset('Europe/Dublin', 2017),
      standardOffset('Australia/Sydney', 2020),
      standardOffset('America/Denver', 2016),
    ]).toEqual([0, 600, -420]);
    expect(standardOffset('UTC-03:30', 2024)).toBe(-210);
  });
});

describe('a wall clock', () => {
  it('changes when the rules say', () => {
    expect(clockChanges('Europe/Madrid', 2024)).toEqual([
      { instant: at('2024-03-31', 1), before: 60, after: 120 },
      { instant: at('2024-10-27', 1), before: 120, after: 60 },
    ]);
    expect(clockChanges('America/Boise', 2023).map(({ instant }) => instant)).toEqual([at('2023-03-12', 9), at('2023-11-05', 8)]);
    expect(clockChanges('America/Phoenix', 2024)).toEqual([]);
    expect(clockChanges('UTC+01:00', 2024)).toEqual([]);
  });

  it('skips an hour in spring and shows one twice in autumn', () => {
    const read = (date: string, hour: number, minute = 0) => wallReading('Europe/Madrid', at(date, hour, minute));
    expect(read('2024-03-31', 1, 59)).toMatchObject({ kind: 'plain', offset: 60 });
    expect(read('2024-03-31', 2)).toMatchObject({ kind: 'skipped' });
    expect(read('2024-03-31', 2, 59)).toMatchObject({ kind: 'skipped' });
    expect(read('2024-03-31', 3)).toMatchObject({ kind: 'plain', offset: 120 });
    expect(read('2024-10-27', 1, 59)).toMatchObject({ kind: 'plain', offset: 120 });
    expect(read('2024-10-27', 2, 30)).toEqual({ kind: 'twice', offset: 120, offsetAgain: 60 });
    expect(read('2024-10-27', 3)).toMatchObject({ kind: 'plain', offset: 60 });
    expect(wallReading('Australia/Sydney', at('2024-01-01', 0))).toMatchObject({ kind: 'plain', offset: 660 });
    expect(wallReading('America/Phoenix', at('2024-07-01', 0))).toMatchObject({ kind: 'plain', offset: -420 });
  });
});
