import type { UnitSystem } from '../../lib/base/units.ts';
import type { ParcelDay } from '../../lib/http/contract/run.ts';
import { ChartFrame, markClass } from './chart-frame.tsx';
import { longDate } from './date-words.ts';
import { figureWithUnit, percent } from './figures.ts';
import styles from './soil-gauge.module.css';

const TOP = 12;
const HEIGHT = 150;

/** How full the root zone is on a day: water left, where stress begins, and what is gone. */
export function SoilGauge({ day, units }: { day: ParcelDay; units: UnitSystem }) {
  const { root_zone_depletion_mm: depletion, readily_available_water_mm: raw, total_available_water_mm: taw } = day;
  if (depletion === null || raw === null || taw === null || taw <= 0)
    return <p>No soil water on {longDate(day.date)}: the run has no weather there.</p>;
  const gone = Math.min(1, depletion / taw);
  const stressAt = Math.min(1, raw / taw);
  return (
    <div className={styles.gauge}>
      <ChartFrame id="soil" title={`Soil water on ${longDate(day.date)}`} description={words(day, units)} width={285} height={176}>
        <rect className={styles.vessel} x={10} y={TOP} width={70} height={HEIGHT} />
        <rect className={styles.water} x={10} y={TOP + gone * HEIGHT} width={70} height={(1 - gone) * HEIGHT} />
        <rect className={markClass('depletion')} x={10} y={TOP} width={70} height={gone * HEIGHT} />
        <line className={markClass('raw')} x1={4} x2={88} y1={TOP + stressAt * HEIGHT} y2={TOP + stressAt * HEIGHT} />
        <text className={styles.label} x={94} y={TOP + 4}>
          full: field capacity
        </text>
        <text className={styles.label} x={94} y={clear(TOP + stressAt * HEIGHT + 4)}>
          stress begins (RAW {figureWithUnit(raw, 'depth', units)})
        </text>
        <text className={styles.label} x={94} y={TOP + HEIGHT + 4}>
          wilting point (TAW {figureWithUnit(taw, 'depth', units)})
        </text>
      </ChartFrame>
      <p className={styles.words}>{words(day, units)}</p>
    </div>
  );
}

/** Keeps the middle label off its neighbours. */
function clear(y: number): number {
  return Math.min(TOP + HEIGHT - 12, Math.max(TOP + 20, y));
}

function words(day: ParcelDay, units: UnitSystem): string {
  const depletion = day.root_zone_depletion_mm ?? Number.NaN;
  const [raw, taw] = [day.readily_available_water_mm ?? Number.NaN, day.total_available_water_mm ?? Number.NaN];
  const state =
    depletion > raw
      ? `past the point where stress begins, by ${figureWithUnit(depletion - raw, 'depth', units)}`
      : `${figureWithUnit(raw - depletion, 'depth', units)} left before stress begins`;
  return `${percent(1 - depletion / taw)} full: ${figureWithUnit(depletion, 'depth', units)} used of ${figureWithUnit(taw, 'depth', units)}; ${state}.`;
}
