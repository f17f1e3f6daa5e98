/** The words, numbers and style a reader sees, on a district of twelve parcels. */
import { describe, test } from 'vitest';
import { classify } from '../../lib/report/classes.ts';
import { classColours } from '../../lib/report/colour-scale.ts';
import { districtReport } from '../../lib/report/district-report.ts';
import { legendOf } from '../../lib/report/legend.ts';
import { mapStyle } from '../../lib/report/map-style.ts';
import { parcelRows, reportInput } from '../support/report-district.ts';
import { expectGolden, goldenJson } from './golden-file.ts';

describe('golden', () => {
  test('legend by quantiles, US units', () => {
    const rows = parcelRows();
    const classes = classify({
      values: rows.map((row) => row.grossRequirement),
      areas: rows.map((row) => row.area),
      method: 'quantile',
      count: 4,
    });
    expectGolden(
      'legend.json',
      goldenJson(legendOf({ title: 'Gross requirement', quantity: 'mm', classes, units: 'us', scale: 'amount', theme: 'light' })),
    );
  });

  test('map style, light and dark', () => {
    const empty = { type: 'FeatureCollection' as const, features: [] };
    const request = {
      parcelTiles: '/tiles/parcels/1/{z}/{x}/{y}.mvt',
      canalTiles: '/tiles/canals/1/{z}/{x}/{y}.mvt',
      maxZoom: 14,
      sites: empty,
      outline: empty,
    };
    const styles = (['light', 'dark'] as const).map((theme) => mapStyle({ ...request, theme, colours: classColours(5, 'amount', theme) }));
    expectGolden('map-style.json', goldenJson(styles));
  });

  test('district report', () => {
    expectGolden('district-report.json', goldenJson(districtReport(reportInput('metric'))));
  });
});
