import type { UnitSystem } from '../../../../lib/base/units.ts';
import type { SiteAnswer, SiteDay } from '../../../../lib/http/contract/rest.ts';
import { WEATHER_VARIABLES, type WeatherVariable } from '../../../../lib/weather/variable.ts';
import { dayKindWord } from '../../../_components/ahead-shade.tsx';
import { type Column, DataTable, FiguresBelow } from '../../../_components/data-table.tsx';
import { fallbackText } from '../../../_components/fallback-words.tsx';
import { figure, type Maybe, plain, type Quantity, unitOf } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { hrefWith } from '../../../_components/query.ts';
import { methodsOf } from '../../../_components/reference-et.tsx';
import type { DayRange } from '../load-site-series.ts';

interface SiteDayTableProps {
  readonly site: SiteAnswer;
  readonly days: readonly SiteDay[];
  readonly range: DayRange;
  readonly units: UnitSystem;
}

/** Every day with what was estimated on it, in words. */
export function SiteDayTable({ site, days, range, units }: SiteDayTableProps) {
  return (
    <FiguresBelow summary={`Every day as a table (${days.length} days)`}>
      <DataTable
        caption={`Weather at ${site.name}, day by day`}
        rows={days}
        rowKey={(day) => day.date}
        columns={columnsOf(site, days, range, units)}
      />
    </FiguresBelow>
  );
}

function columnsOf(site: SiteAnswer, days: readonly SiteDay[], range: DayRange, units: UnitSystem): Column<SiteDay>[] {
  const path = `/weather/${encodeURIComponent(site.code)}`;
  const inReaders = (key: string, head: string, quantity: Quantity, pick: (day: SiteDay) => Maybe): Column<SiteDay> => ({
    key,
    head,
    unit: unitOf(quantity, units),
    numeric: true,
    cell: (day) => figure(pick(day), quantity, units),
  });
  const fixed = (key: string, head: string, unit: string, pick: (day: SiteDay) => Maybe): Column<SiteDay> => ({
    key,
    head,
    unit,
    numeric: true,
    cell: (day) => plain(pick(day), 2),
  });
  return [
    {
      key: 'date',
      head: 'Day',
      rowHead: true,
      oneLine: true,
      cell: (day) => <Go href={`${hrefWith(path, {}, { ...range, source: site.source, day: day.date })}#budget`}>{day.date}</Go>,
    },
    { key: 'kind', head: 'Rests on', oneLine: true, cell: (day) => dayKindWord(day.day_kind) },
    inReaders('tmax', 'Maximum', 'temperature', (day) => day.completed.air_temperature_max_c),
    inReaders('tmin', 'Minimum', 'temperature', (day) => day.completed.air_temperature_min_c),
    fixed('ea', 'Vapour pressure', 'kPa', (day) => day.completed.vapour_pressure_kpa),
    fixed('rs', 'Solar radiation', 'MJ m⁻² d⁻¹', (day) => day.completed.solar_radiation_mj_m2_d),
    fixed('rso', 'Clear sky', 'MJ m⁻² d⁻¹', (day) => day.clear_sky_radiation_mj_m2_d),
    fixed('ra', 'Extraterrestrial', 'MJ m⁻² d⁻¹', (day) => day.extraterrestrial_radiation_mj_m2_d),
    inReaders('u2', 'Wind at 2 m', 'speed', (day) => day.completed.wind_speed_2m_m_s),
    inReaders('rain', 'Rain', 'depth', (day) => day.completed.precipitation_mm),
    ...methodsOf(days).map((method) => inReaders(method.key, method.name, 'depth', (day) => day[method.key])),
    { key: 'quality', head: 'Not as measured', cell: qualityWords },
    { key: 'estimated', head: 'Estimated', cell: (day) => day.fallbacks.map(fallbackText).join('; ') || 'nothing' },
  ];
}

/** Observed values that were corrected, doubted or filled, in words. */
function qualityWords({ quality }: SiteDay): string {
  const told = Object.entries(quality).map(
    ([name, what]) => `${WEATHER_VARIABLES[name as WeatherVariable]?.term ?? name} ${inWords(what)}`,
  );
  return told.join('; ') || 'nothing';
}

/** @example inWords('filledFromNeighbour') // 'filled from neighbour' */
function inWords(name: string): string {
  return name.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`);
}
