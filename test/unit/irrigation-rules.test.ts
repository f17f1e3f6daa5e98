/** What each irrigation rule, system limit and kind of water does, on strips made by hand. Expected values are worked out beside each check. */
import { describe, expect, test } from 'vitest';
import { powerOfShare } from '../../lib/base/power.ts';
import { mulberry32 } from '../../lib/base/random.ts';
import { efficiencyOfDepth, netOfGross } from '../../lib/crop/application-efficiency.ts';
import { appliedDepth, callingDepletion, runsShort, startingDepletion } from '../../lib/crop/irrigation-rule.ts';
import { pondDepth, pondPores, pondSupply } from '../../lib/crop/paddy.ts';
import { MARK } from '../../lib/season/pack.ts';
import { walkStrip } from '../../lib/season/walk.ts';
import { type HandStrip, handStrip } from '../support/hand-strip.ts';

const CROPPED = MARK.planted | MARK.mayIrrigate;
const DAYS = 40;

/** A strip that uses 5 mm a day (single Kc 1, ETo 5) from a root zone that holds 100 mm, p 0.5 at that demand. */
function steady(change: Partial<HandStrip> = {}): ReturnType<typeof handStrip> {
  const made = handStrip({
    days: DAYS,
    opening: [0, 0, 0],
    ...change,
    settings: { coefficient: 'single', ...change.settings },
    weather: { referenceEt: 5, ...change.weather },
    curve: { basal: 1, available: 100, tableFraction: 0.5, mark: CROPPED, ...change.curve },
  });
  expect(walkStrip(made.walk)).toBeLessThan(1e-9);
  return made;
}

const onDays = (row: Float64Array) => [...row.keys()].filter((d) => row[d] > 0);
const at = (days: readonly number[], value: number) => Array.from({ length: DAYS }, (_, d) => (days.includes(d) ? value : 0));

describe('rules', () => {
  test('depletion: at RAW of 50 mm, after ten days of 5 mm, the soil is refilled', () => {
    const net = steady().row('net_requirement');
    expect(onDays(net)).toEqual([10, 20, 30]);
    expect(net[10]).toBeCloseTo(50, 9);
  });

  test('depletion with a trigger of 0.6 and a refill of half: 30 mm call, 15 mm are put on', () => {
    const net = steady({ curve: { triggerShare: 0.6, refillShare: 0.5 } }).row('net_requirement');
    expect(onDays(net).slice(0, 3)).toEqual([6, 9, 12]);
    expect(net[6]).toBeCloseTo(15, 9);
    expect(net[9]).toBeCloseTo(15, 9);
  });

  test('interval: only on its days, whatever the soil says, and never without depletion', () => {
    const due = at([0, 7, 14, 21], MARK.due).map((mark) => mark | MARK.planted);
    const net = steady({ curve: { mark: due } }).row('net_requirement');
    expect(onDays(net)).toEqual([7, 14, 21]);
    expect(net[7]).toBeCloseTo(35, 9);
  });

  test('daily replacement: every day what was used the day before', () => {
    const net = steady({ curve: { mark: MARK.planted | MARK.due } }).row('net_requirement');
    expect(net[0]).toBe(0);
    for (let d = 1; d < DAYS; d++) expect(net[d]).toBeCloseTo(5, 9);
  });

  test('fixed depth: 20 mm each time the depletion passes 20 mm', () => {
    const net = steady({ curve: { fixedDepth: 20 } }).row('net_requirement');
    expect(onDays(net).slice(0, 3)).toEqual([4, 8, 12]);
    expect(net[4]).toBe(20);
  });

  test('fixed depth above RAW: put on at RAW, and what the soil does not take is lost below', () => {
    const made = steady({ curve: { fixedDepth: 70 } });
    expect(made.row('net_requirement')[10]).toBe(70);
    expect(made.row('irrigation_percolation')[10]).toBeCloseTo(20, 9);
  });

  test('a trigger above 1 lets the crop run short on purpose', () => {
    const made = steady({ curve: { triggerShare: 1.6, refillShare: 1 } });
    const first = onDays(made.row('net_requirement'))[0];
    expect(first).toBeGreaterThan(16); // 80 mm at 5 mm a day, and slower once short
    expect(made.row('stress_coefficient')[first - 1]).toBeLessThan(1);
  });

  test('prescribed: a germination depth is given to a full soil, and is lost', () => {
    const made = steady({ curve: { mark: MARK.planted, prescribed: at([3], 40) } });
    expect(made.row('net_requirement')[3]).toBe(40);
    expect(made.row('irrigation_percolation')[3]).toBeCloseTo(25, 9); // 15 mm had been used
  });

  test('a depth the system cannot give in a day is given over days', () => {
    const net = steady({ curve: { mark: MARK.planted, prescribed: at([3], 40) }, ground: { most: 25 } }).row('net_requirement');
    expect([...net.subarray(3, 6)]).toEqual([25, 15, 0]);
  });

  test('refill before planting: down to the scheduling depth', () => {
    const made = steady({
      opening: [20, 30, 0],
      curve: { basal: 0, mark: at([2], MARK.refill), planting: -1, scheduleAvailable: 150, deepestAvailable: 200 },
    });
    // below the roots 30 mm are lacking in 100 mm of soil, 50 mm of it within the scheduling depth: 20 + 15
    expect(made.row('net_requirement')[2]).toBeCloseTo(35, 9);
  });

  test('recorded: the gross stays what was recorded, to the bit, and the rule is silent', () => {
    const made = steady({
      curve: { mark: CROPPED | MARK.recorded, prescribed: at([5, 6], 33.3) },
      ground: { efficiencies: Float64Array.of(0.6) },
    });
    const gross = made.row('gross_requirement');
    expect(onDays(gross)).toEqual([5, 6]);
    expect(gross[5]).toBe(33.3);
    expect(made.row('net_requirement')[5]).toBeCloseTo(19.98, 9);
    expect(made.row('stress_coefficient')[DAYS - 1]).toBeLessThan(1);
  });

  test('rain-fed: none of all this', () => {
    const net = steady({ settings: { irrigate: false }, curve: { prescribed: at([3], 40) } }).row('net_requirement');
    expect(onDays(net)).toEqual([]);
  });
});

describe('limits of the system', () => {
  test('no application below the least depth: it waits until the refill is worth it', () => {
    const net = steady({ curve: { mark: MARK.planted | MARK.due }, ground: { minimumDepth: 12 } }).row('net_requirement');
    expect(onDays(net).slice(0, 3)).toEqual([3, 6, 9]);
    expect(net[3]).toBeCloseTo(15, 9);
  });

  test('an application goes on over days until the soil is refilled', () => {
    const net = steady({ ground: { most: 20 } }).row('net_requirement');
    // 50 mm lacking, 20 a day while 5 a day are used: 20, 20, then 50 − 40 + 10
    expect([...net.subarray(10, 14)].map((depth) => Math.round(depth))).toEqual([20, 20, 20, 0]);
  });
});

describe('leaching, capillary rise, salt', () => {
  test('a leaching requirement of 0.2: a fifth of what is put on passes the root zone', () => {
    const made = steady({ ground: { leachingRequirement: Float64Array.of(0.2) } });
    expect(made.row('net_requirement')[10]).toBeCloseTo(62.5, 9); // 50 / 0.8
    expect(made.row('irrigation_percolation')[10]).toBeCloseTo(12.5, 9);
  });

  test('what leaches refills the soil below the roots first', () => {
    const made = steady({
      opening: [0, 8, 0],
      curve: { scheduleAvailable: 100, deepestAvailable: 150 },
      ground: { leachingRequirement: Float64Array.of(0.2) },
    });
    expect(made.row('irrigation_percolation')[10]).toBeCloseTo(4.5, 9);
  });

  test('capillary rise: at most what the table sends, at most what the soil lacks, none into full soil', () => {
    const made = steady({ curve: { mark: MARK.planted, capillaryMost: 3 } });
    const rise = made.row('capillary_rise');
    expect(rise[0]).toBe(0);
    expect(rise[1]).toBe(3);
    expect(made.row('root_zone_depletion')[1]).toBeCloseTo(7, 9);
    const much = steady({ curve: { mark: MARK.planted, capillaryMost: 50 } });
    expect(much.row('capillary_rise')[1]).toBeCloseTo(5, 9);
  });

  test('salt stress multiplies, and stands in Ks', () => {
    const made = steady({ curve: { mark: MARK.planted, saltStress: 0.8 } });
    expect(made.row('stress_coefficient')[0]).toBe(0.8);
    expect(made.row('adjusted_crop_et')[0]).toBeCloseTo(4, 9);
  });
});

describe('ponded rice', () => {
  const ground = {
    pores: Float64Array.of(30),
    pondMinimum: Float64Array.of(10),
    pondTarget: Float64Array.of(50),
    bund: Float64Array.of(100),
    percolationRate: 4,
  };
  const ponded = MARK.planted | MARK.ponded;

  test('fills soil, pores and pond, loses percolation and ET, and is filled again below its minimum', () => {
    const made = steady({ opening: [25, 0, 0], curve: { mark: ponded }, ground });
    const [net, pond] = [made.row('net_requirement'), made.row('ponded_water')];
    expect(net[0]).toBeCloseTo(105, 9); // 25 + 30 + 50
    expect(pond[0]).toBeCloseTo(71, 9); // 80 − 4 − 5
    expect(onDays(net).slice(0, 2)).toEqual([0, 5]); // 80 − 5 × 9 = 35, 5 mm on the field
    expect(net[5]).toBeCloseTo(45, 9);
    expect(made.row('irrigation_percolation')[0]).toBe(4);
    expect(Math.min(...made.row('stress_coefficient'))).toBe(1);
  });

  test('seepage refills dry soil below the roots before it is lost', () => {
    const made = steady({ opening: [0, 10, 0], curve: { mark: ponded, scheduleAvailable: 100, deepestAvailable: 150 }, ground });
    expect([...made.row('irrigation_percolation').subarray(0, 4)]).toEqual([0, 0, 2, 4]);
  });

  test('rain above the bunds spills and runs off; the rest of it is kept', () => {
    const made = steady({ opening: [0, 0, 0], weather: { precipitation: at([1], 90) }, curve: { mark: ponded }, ground });
    // 80 − 9 = 71, + 90 = 161, 130 to the top of the bunds
    expect(made.row('surface_runoff')[1]).toBeCloseTo(31, 9);
    expect(made.row('effective_precipitation')[1]).toBeCloseTo(59, 9);
  });

  test('drained: the water above field capacity leaves, none of it as effective rain', () => {
    const marks = Array.from({ length: DAYS }, (_, d) => (d < 3 ? ponded : d === 3 ? MARK.planted | MARK.drained : MARK.planted));
    const made = steady({ curve: { mark: marks }, ground });
    expect(made.row('ponded_water')[2]).toBeCloseTo(53, 9); // 80 − 3 × 9
    expect(made.row('ponded_water')[3]).toBe(0);
    expect(made.row('irrigation_percolation')[3]).toBeCloseTo(53, 9);
    expect(made.row('effective_precipitation')[3]).toBe(0);
  });
});

describe('ground', () => {
  test('frozen: everything runs off and nothing evaporates', () => {
    const made = steady({
      settings: { coefficient: 'dual' },
      weather: { precipitation: at([2], 20), frozen: 1 },
      curve: { basal: 0, mark: 0, planting: -1 },
      ground: { readilyEvaporable: 9, totalEvaporable: 25 },
    });
    expect(made.row('surface_runoff')[2]).toBe(20);
    expect(Math.max(...made.row('evaporation'))).toBe(0);
  });

  test('snow on the ground: neither crop nor soil takes water', () => {
    const made = steady({ weather: { precipitation: at([0], 12), liquid: 0, snowWater: 12 } });
    expect(Math.max(...made.row('crop_et'))).toBe(0);
    expect(made.row('effective_precipitation')[0]).toBe(0);
  });

  test('mulch: half the evaporation of open ground while it is wet', () => {
    const bare = {
      settings: { coefficient: 'dual' },
      curve: { basal: 0, mark: 0, planting: -1 },
      ground: { readilyEvaporable: 9, totalEvaporable: 25 },
    } as const;
    const open = steady(bare).row('evaporation');
    const covered = steady({ ...bare, curve: { ...bare.curve, evaporationShare: 0.5 } }).row('evaporation');
    expect(open[0]).toBeCloseTo(6, 9); // Kc max 1.2 × 5 mm
    expect(covered[0]).toBeCloseTo(3, 9);
  });

  test('roots that grow take over depletion by what the soil holds, not by its thickness', () => {
    const available = Array.from({ length: DAYS }, (_, d) => (d === 0 ? 40 : 100));
    const made = steady({ opening: [0, 50, 0], curve: { mark: MARK.planted, basal: 0, available, deepestAvailable: 140 } });
    expect(made.row('root_zone_depletion')[1]).toBeCloseTo(30, 9); // 50 × 60 / 100
  });
});

describe('the functions the loop is written after', () => {
  test('efficiency by depth and back: net of gross is its inverse, on falling curves too', () => {
    const [depths, efficiencies] = [
      [20, 60],
      [0.5, 0.7],
    ];
    expect([10, 20, 40, 60, 90].map((net) => efficiencyOfDepth(depths, efficiencies, net))).toEqual([0.5, 0.5, 0.6, 0.7, 0.7]);
    for (const net of [5, 20, 33, 60, 80])
      expect(netOfGross(depths, efficiencies, net / efficiencyOfDepth(depths, efficiencies, net))).toBeCloseTo(net, 9);
    for (const net of [5, 20, 33, 60, 80])
      expect(netOfGross(depths, [0.8, 0.6], net / efficiencyOfDepth(depths, [0.8, 0.6], net))).toBeCloseTo(net, 9);
  });

  test('depths and depletions of the rules', () => {
    expect(startingDepletion(0.8, 0.5, 120, 0)).toBe(48);
    expect(startingDepletion(0.8, 0.5, 120, 30)).toBe(30);
    expect(callingDepletion(30, 0.5, 10)).toBe(25);
    expect(callingDepletion(3, 1, 10)).toBe(0);
    expect([runsShort(1, 61, 60), runsShort(1.01, 61, 60), runsShort(1, 60, 60)]).toEqual([true, false, false]);
    expect(appliedDepth(36, 0.1)).toBeCloseTo(40, 12);
  });

  test('depths of a pond', () => {
    expect(pondPores(0.45, 0.35, 0.2)).toBeCloseTo(20, 12);
    expect(pondPores(0.3, 0.35, 0.2)).toBe(0);
    expect([pondDepth(60, 20), pondDepth(10, 20)]).toEqual([40, 0]);
    expect([pondSupply(0, 25, 20, 50), pondSupply(15, 0, 20, 50)]).toEqual([45, 85]);
  });

  test('powers agree with the library’s to 1e-12 of their value', () => {
    const random = mulberry32(5);
    let worst = 0;
    for (let k = 0; k < 20000; k++) {
      const [share, exponent] = [random() ** 3, 0.1 + 20 * random()];
      const expected = share ** exponent;
      if (expected > 1e-15) worst = Math.max(worst, Math.abs(powerOfShare(share, exponent) / expected - 1));
    }
    expect(worst).toBeLessThan(1e-12);
    expect([powerOfShare(1, 2), powerOfShare(0, 2), powerOfShare(0.001, 30)]).toEqual([1, 0, 0]);
    expect(powerOfShare(Number.NaN, 2)).toBeNaN();
    expect(powerOfShare(0.5, Number.NaN)).toBeNaN();
  });
});
