import type { UnitSystem } from '../../lib/base/units.ts';
import styles from './report-links.module.css';

const REPORTS = [
  {
    file: 'district.pdf',
    name: 'District report',
    says: 'Totals, weeks, canals and crops with their cautions, to print or send. PDF.',
    period: false,
  },
  {
    file: 'parcels.csv',
    name: 'Parcels',
    says: 'One row per parcel and period: ET, rain, requirement, depletion, stress, volume. CSV.',
    period: true,
  },
  { file: 'parcels.geojson', name: 'Parcels on a map', says: 'Shapes with the season’s totals, WGS 84. GeoJSON.', period: false },
  { file: 'reaches.csv', name: 'Canals', says: 'One row per reach and period: demand, loss, inflow, capacity, share. CSV.', period: true },
  { file: 'summary.csv', name: 'Summary', says: 'Totals by district, canal, crop and method. CSV.', period: false },
] as const;

/** Documents of a run, each a small form, so that period and units can be chosen without script. */
export function ReportLinks({ run, units }: { run: string; units: UnitSystem }) {
  return (
    <ul className={styles.reports}>
      {REPORTS.map((report) => (
        <li key={report.file}>
          <form action={`/api/v1/runs/${run}/reports/${report.file}`} className={styles.report}>
            <div>
              <h3>{report.name}</h3>
              <p className="small muted">{report.says}</p>
            </div>
            <div className="row">
              {report.period ? <PeriodChoice report={report.name} /> : null}
              <UnitChoice units={units} report={report.name} />
              <button type="submit" className="button">
                Download
              </button>
            </div>
          </form>
        </li>
      ))}
    </ul>
  );
}

function PeriodChoice({ report }: { report: string }) {
  return (
    <select name="period" defaultValue="season" aria-label={`Period of ${report}`}>
      <option value="day">by day</option>
      <option value="week">by week</option>
      <option value="month">by month</option>
      <option value="season">whole season</option>
    </select>
  );
}

function UnitChoice({ units, report }: { units: UnitSystem; report: string }) {
  return (
    <select name="units" defaultValue={units} aria-label={`Units of ${report}`}>
      <option value="metric">mm, m³, m³/s</option>
      <option value="us">in, ac-ft, cfs</option>
    </select>
  );
}
