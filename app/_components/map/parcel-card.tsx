'use client';

import { useEffect, useRef } from 'react';
import type { UnitSystem } from '../../../lib/base/units.ts';
import type { ParcelDay, ParcelPeriod, ParcelSeason } from '../../../lib/http/contract/run.ts';
import { dayMonth } from '../date-words.ts';
import { EstimatedShare, estimatedShare } from '../fallback-words.tsx';
import { figure, figureWithUnit, type Maybe, percent, type Quantity, sumOf, unitOf } from '../figures.ts';
import { SoilGauge } from '../soil-gauge.tsx';
import styles from './demand-map.module.css';
import type { WeekSpan } from './map-values.ts';
import { SeasonSketch } from './season-sketch.tsx';
import { useAnswer } from './use-map-data.ts';

interface CardProps {
  readonly run: string;
  readonly code: string;
  readonly span: WeekSpan;
  readonly words: string;
  /** the span is the whole run */
  readonly whole: boolean;
  readonly units: UnitSystem;
  readonly onClose: () => void;
  readonly onPlace: (longitude: number, latitude: number) => void;
}

/** The chosen parcel: its water chain over the chosen weeks, how full its soil is, its season, and the way to every working. */
export function ParcelCard(props: CardProps) {
  const { run, code, span, whole, onPlace } = props;
  const path = `/api/v1/runs/${run}/parcels`;
  const season = useAnswer<ParcelSeason>(`${path}/${encodeURIComponent(code)}/daily`);
  const periods = useAnswer<{ items: ParcelPeriod[] }>(
    `${path}?parcel=${encodeURIComponent(code)}&period=${whole ? 'season' : 'week'}&limit=200`,
  );
  const heading = useRef<HTMLHeadingElement>(null);
  // biome-ignore lint/correctness/useExhaustiveDependencies: the heading takes the focus whenever another parcel is shown
  useEffect(() => heading.current?.focus({ preventScroll: true }), [code]);
  useEffect(() => {
    if (season.data) onPlace(season.data.longitude, season.data.latitude);
  }, [season.data, onPlace]);
  const rows = (periods.data?.items ?? []).filter((row) => row.start >= span.start && row.end <= span.end);
  const fault = season.fault ?? periods.fault;
  return (
    <aside
      className={styles.card}
      aria-label={`Parcel ${code}`}
      onKeyDown={(event) => {
        if (event.key === 'Escape') props.onClose();
      }}
    >
      <div className="spread">
        <h2 ref={heading} tabIndex={-1}>
          Parcel {code}
        </h2>
        <button type="button" className="button quiet no-print" onClick={props.onClose}>
          Close
        </button>
      </div>
      {fault ? (
        <p className="notice bad" role="alert">
          {fault}
        </p>
      ) : null}
      {season.data ? (
        <Particulars season={season.data} units={props.units} />
      ) : fault ? null : (
        <p className="muted">Reading the parcel …</p>
      )}
      {season.data && rows.length > 0 ? <Chain season={season.data} rows={rows} {...props} /> : null}
      {season.data ? <Soil season={season.data} {...props} /> : null}
      <p className="row no-print">
        <a href={`/parcels/${encodeURIComponent(code)}?run=${run}`}>Everything about this parcel</a>
      </p>
    </aside>
  );
}

function Particulars({ season, units }: { season: ParcelSeason; units: UnitSystem }) {
  const crops = season.plantings.map((planting) =>
    planting.area_share < 1 ? `${planting.crop_name} (${percent(planting.area_share)})` : planting.crop_name,
  );
  return (
    <p className="small">
      {season.name ? <strong>{season.name}. </strong> : null}
      {[...new Set(crops)].join(' + ') || 'Nothing planted'}, {figureWithUnit(season.area_ha, 'area', units)},{' '}
      {season.soil.name.toLowerCase()}, {season.method.name.toLowerCase()}
      {season.turnout ? `, turnout ${season.turnout}` : ''}
      {season.reach ? `, reach ${season.reach}` : ''}.
    </p>
  );
}

/** The day of the span on which a quantity is greatest: the day whose working says most about it. */
function tellingDay(days: readonly ParcelDay[], pick: (day: ParcelDay) => number | null): string | null {
  let best: ParcelDay | null = null;
  for (const day of days) if (best === null || (pick(day) ?? -1) > (pick(best) ?? -1)) best = day;
  return best?.date ?? null;
}

function Chain({ season, rows, run, code, span, words, units }: CardProps & { season: ParcelSeason; rows: readonly ParcelPeriod[] }) {
  const days = season.days.filter((day) => day.date >= span.start && day.date <= span.end);
  const link = (pick: (day: ParcelDay) => number | null) => {
    const date = tellingDay(days, pick);
    return date ? { href: `/parcels/${encodeURIComponent(code)}/working/${date}?run=${run}`, day: dayMonth(date) } : null;
  };
  const total = (pick: (row: ParcelPeriod) => number | null) => sumOf(rows, pick);
  const gross = total((row) => row.gross_requirement_mm);
  return (
    <section aria-label={`Water chain, ${words}`}>
      <h3 className={styles.cardName}>Water, {words}</h3>
      <ol className="chain">
        <Link
          water="et"
          name="Reference ET"
          value={total((row) => row.reference_et_mm)}
          working={link((day) => day.reference_et_mm)}
          units={units}
        />
        <Link water="et" name="Crop ET" value={total((row) => row.crop_et_mm)} working={link((day) => day.crop_et_mm)} units={units} />
        <Link
          water="rain"
          name="Rain"
          value={total((row) => row.precipitation_mm)}
          working={link((day) => day.precipitation_mm)}
          units={units}
        />
        <Link
          water="rain"
          name="Effective rain"
          value={total((row) => row.effective_precipitation_mm)}
          working={link((day) => day.effective_precipitation_mm)}
          units={units}
        />
        <Link
          water="irrigation"
          name="Net requirement"
          value={total((row) => row.net_requirement_mm)}
          working={link((day) => day.net_requirement_mm)}
          units={units}
          note="what the soil water balance asks for in these days"
        />
        <Link
          water="loss"
          name="Gross requirement"
          value={gross}
          working={link((day) => day.gross_requirement_mm)}
          units={units}
          note={`÷ ${season.method.efficiency.toFixed(2)}, the efficiency of ${season.method.name.toLowerCase()}`}
        />
        <Link
          water="irrigation"
          name="Volume at the turnout"
          quantity="volume"
          value={total((row) => row.gross_volume_m3)}
          working={link((day) => day.gross_volume_m3)}
          units={units}
          note={`${figureWithUnit(gross, 'depth', units)} on ${figureWithUnit(season.area_ha, 'area', units)}`}
        />
      </ol>
      <EstimatedShare share={estimatedShare(days)} of="the days" />
    </section>
  );
}

function Link(props: {
  water: string;
  name: string;
  value: Maybe;
  quantity?: Quantity;
  working: { href: string; day: string } | null;
  units: UnitSystem;
  note?: string;
}) {
  const quantity = props.quantity ?? 'depth';
  return (
    <li data-water={props.water}>
      <span className="chain-name">{props.name}</span>
      <span className="chain-value">
        {figure(props.value, quantity, props.units)} <span className="unit">{unitOf(quantity, props.units)}</span>
      </span>
      <span className="chain-note">
        {props.note ? `${props.note}. ` : null}
        {props.working ? (
          <a href={props.working.href} aria-label={`${props.name}: working of ${props.working.day}`}>
            working, {props.working.day}
          </a>
        ) : null}
      </span>
    </li>
  );
}

function Soil({ season, span, units }: CardProps & { season: ParcelSeason }) {
  const end = season.days.findLast((day) => day.date <= span.end);
  return (
    <>
      {end ? <SoilGauge day={end} units={units} /> : null}
      <SeasonSketch days={season.days} span={span} units={units} />
    </>
  );
}
