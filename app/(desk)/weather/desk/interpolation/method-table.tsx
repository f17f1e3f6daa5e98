import type { CarriedVariableAnswer, MethodErrors } from '../../../../../lib/http/contract/interpolation.ts';
import { type Column, DataTable } from '../../../../_components/data-table.tsx';
import { type Maybe, plain } from '../../../../_components/figures.ts';
import { Go } from '../../../../_components/go.tsx';
import { hrefWith, type Query } from '../../../../_components/query.ts';
import { type ErrorUnit, inSentence } from './error-units.ts';
import { INTERPOLATION_PATH } from './load-interpolation.ts';

interface MethodTableProps {
  readonly shown: CarriedVariableAnswer;
  readonly query: Query;
  readonly unit: ErrorUnit;
}

/** Every way of carrying the variable with its errors; the one with the least is marked, in words. */
export function MethodTable({ shown, query, unit }: MethodTableProps) {
  const error = (key: string, head: string, pick: (row: MethodErrors) => Maybe): Column<MethodErrors> => ({
    key,
    head,
    unit: unit.unit,
    numeric: true,
    cell: (row) => plain(scaled(pick(row), unit), unit.decimals),
  });
  return (
    <>
      <DataTable
        caption={`Errors of ${inSentence(shown.term)} by method`}
        rows={shown.methods}
        rowKey={(row) => row.method}
        columns={[
          {
            key: 'name',
            head: 'Method',
            rowHead: true,
            wide: true,
            cell: (row) => (
              <Go
                href={`${hrefWith(INTERPOLATION_PATH, query, { method: row.method })}#errors`}
                aria-current={row.method === shown.shown_method ? 'true' : undefined}
              >
                {row.name}
              </Go>
            ),
          },
          { key: 'chosen', head: 'Least error', cell: (row) => (row.chosen ? <span className="tag good">chosen</span> : null) },
          error('bias', 'Bias', (row) => row.bias),
          error('rmse', 'RMSE', (row) => row.rmse),
          error('mae', 'Mean absolute error', (row) => row.mae),
          { key: 'msdr', head: 'MSDR', numeric: true, cell: (row) => (row.msdr === null ? '' : plain(row.msdr, 2)) },
          { key: 'n', head: 'Values', numeric: true, cell: (row) => plain(row.n, 0) },
        ]}
      />
      <p className="small muted">
        Bias is the mean of estimate less measurement, RMSE the root of the mean squared error. MSDR is the squared error over the variance
        that kriging expects: near 1 the variance can be trusted, above 1 it is too small. {gradientWords(shown, unit)}
      </p>
    </>
  );
}

function scaled(value: Maybe, unit: ErrorUnit): Maybe {
  return value === null || value === undefined ? value : value * unit.factor;
}

function gradientWords({ gradient_per_km, variable }: CarriedVariableAnswer, unit: ErrorUnit): string {
  if (variable === 'precipitation_mm') return 'Rain has no elevation trend here: an amount added by height would fall on dry days too.';
  if (gradient_per_km === null) return 'No elevation trend could be fitted: it takes four stations of known elevation that span 50 m.';
  return `The trend fitted to the stations is ${plain(gradient_per_km * unit.factor, unit.decimals)} ${unit.unit} per 1000 m of elevation.`;
}
