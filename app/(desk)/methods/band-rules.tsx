import { DEFAULT_FIELD_ERRORS, type ErrorParts } from '../../../lib/season/band-factors.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { percent } from '../../_components/figures.ts';
import { Section } from '../../_components/page-head.tsx';

/** How a band is made, with its assumptions. */
export function BandRules() {
  return (
    <Section
      id="band"
      title="How sure a figure is: the band"
      note="A run with members for the band is computed many times with errors that could be there. In 8 of 10 of these the figure lies between P10 and P90."
    >
      <ul>
        <li>
          The errors are drawn by Latin hypercube sampling (McKay, Beckman &amp; Conover 1979): each error takes every part of its
          distribution once. The seed is a setting of the run; the same seed gives the same band, whatever machine computes it.
        </li>
        <li>
          Each error is a factor with a lognormal distribution of mean 1, σ² = ln(1 + cv²), so that errors which even out leave a sum where
          it was. Every member is a season of its own: the soil water of a parcel answers to the errors day by day, and irrigations move
          with it.
        </li>
        <li>
          Weather: one error per day on reference ET, shared by all parcels, which remembers the day before: z(d) = ρ z(d − 1) + √(1 − ρ²)
          ε(d). Its size and memory come from leaving one station out at a time, or from the kriging variance where reference ET is kriged;
          10 % and ρ = 0.5 are taken for one station or a grid (common practice).
        </li>
        <li>
          Days to come add the spread of the years on record about their mean (at least three years; else 25 %, common practice). A forecast
          grows from the error of an observed day to that of the normal over ten days (common practice).
        </li>
        <li>
          Volumes are added up per member and carried up the canal tree with the losses of each member. What parcels share does not level
          out in a canal, what is each parcel’s own does: a canal is surer than its parcels, as a share of its flow, but never as sure as if
          all errors were independent.
        </li>
        <li>
          P10, P50 and P90 are sample quantiles, linear between members (Hyndman &amp; Fan 1996, definition 7). P50 need not be the run’s
          own figure.
        </li>
        <li>
          Taken as known, and so not in the band: rain, areas, planting dates, what is planted, canal losses, and the model itself. The
          truth can lie further out than the band.
        </li>
      </ul>
      <DataTable
        caption="Errors of a band, as coefficients of variation"
        rows={ROWS}
        rowKey={({ name }) => name}
        columns={[
          { key: 'name', head: 'Error of', rowHead: true, cell: ({ name }) => name },
          { key: 'within', head: 'Shared within', cell: ({ within }) => within },
          { key: 'shared', head: 'Shared part', numeric: true, cell: ({ parts }) => percent(parts.shared) },
          { key: 'own', head: 'Own part of each parcel', numeric: true, cell: ({ parts }) => percent(parts.own) },
          { key: 'source', head: 'Source', cell: () => 'common practice, no source' },
        ]}
      />
    </Section>
  );
}

const ROWS: readonly { readonly name: string; readonly within: string; readonly parts: ErrorParts }[] = [
  { name: 'Basal crop coefficient', within: 'a crop', parts: DEFAULT_FIELD_ERRORS.coefficient },
  { name: 'Application efficiency', within: 'an application method', parts: DEFAULT_FIELD_ERRORS.efficiency },
  { name: 'Available water of the soil', within: 'a soil class', parts: DEFAULT_FIELD_ERRORS.available },
];
