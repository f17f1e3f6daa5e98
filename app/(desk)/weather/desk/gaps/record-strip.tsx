import type { CSSProperties } from 'react';
import { dayNumber } from '../../../../../lib/base/civil-date.ts';
import type { SiteRecord } from '../../../../../lib/http/contract/gaps.ts';
import { dateRange, monthTicks } from '../../../../_components/date-words.ts';
import styles from './gaps.module.css';
import { daysText, METHOD_NAMES, METHODS } from './method-words.ts';

const HEIGHT = 14;

/** The record of one site over the days shown: a strip for each series, drawn by how each day was got. */
export function RecordStrips({ record, from, to }: { record: SiteRecord; from: string; to: string }) {
  const days = dayNumber(to) - dayNumber(from) + 1;
  return (
    <div className={styles.strips}>
      {record.series.map((series) => (
        <div key={series.series} className={styles.strip}>
          <span className={styles.term}>{series.term}</span>
          <Strip series={series} first={dayNumber(from)} days={days} />
        </div>
      ))}
      <div className={styles.strip} aria-hidden="true">
        <span />
        <MonthAxis from={from} to={to} days={days} />
      </div>
    </div>
  );
}

function Strip({ series, first, days }: { series: SiteRecord['series'][number]; first: number; days: number }) {
  return (
    <svg
      className={styles.svg}
      viewBox={`0 0 ${days} ${HEIGHT}`}
      preserveAspectRatio="none"
      role="img"
      aria-label={`${series.term}: ${daysText(series.days)}`}
    >
      {series.spans.map((span) => {
        const height = HEIGHT * METHODS[span.method].height;
        const [start, end] = [dayNumber(span.from) - first, dayNumber(span.to) - first + 1];
        return (
          <rect
            key={span.from}
            data-method={span.method}
            x={start}
            width={end - start}
            y={height === 0 ? 0 : HEIGHT - height}
            height={height === 0 ? HEIGHT : height}
          >
            <title>{`${series.term}, ${dateRange(span.from, span.to)}: ${METHODS[span.method].name}`}</title>
          </rect>
        );
      })}
    </svg>
  );
}

function MonthAxis({ from, to, days }: { from: string; to: string; days: number }) {
  return (
    <span className={styles.axis}>
      {monthTicks(from, to).map((tick) => (
        <span key={tick.offset} style={{ '--at': tick.offset / days } as CSSProperties}>
          {tick.name}
        </span>
      ))}
    </span>
  );
}

/** What each way of drawing means; the shares of height tell them apart without colour. */
export function MethodLegend() {
  return (
    <ul className={styles.legend} aria-label="How a day was got">
      {METHOD_NAMES.map((method) => (
        <li key={method}>
          <svg className={styles.swatch} viewBox={`0 0 ${HEIGHT} ${HEIGHT}`} aria-hidden="true">
            <rect
              data-method={method}
              x={0}
              width={HEIGHT}
              y={METHODS[method].height === 0 ? 0 : HEIGHT * (1 - METHODS[method].height)}
              height={METHODS[method].height === 0 ? HEIGHT : HEIGHT * METHODS[method].height}
            />
          </svg>
          <span>
            <strong>{METHODS[method].name}</strong>: {METHODS[method].help}
          </span>
        </li>
      ))}
    </ul>
  );
}
