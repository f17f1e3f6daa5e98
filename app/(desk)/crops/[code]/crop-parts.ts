/** The values of a crop that not every crop has, as rows of a table. */
import type { CropAnswer } from '../../../../lib/http/contract/rest.ts';
import type { Crop } from '../../../../lib/season/types.ts';

export interface PartRow {
  readonly key: string;
  readonly term: string;
  readonly value: number;
  readonly unit: string;
  readonly source: string;
}

type Rows = readonly (readonly [term: string, value: number | undefined, unit: string])[];

/** Rows of single coefficients, response by stage, salt, canopy, dormancy and ponding; none of what the crop does not have. */
export function partRows(crop: CropAnswer): PartRow[] {
  const definition = crop.definition as Partial<Crop>;
  const { single, stageResponse, salinity, canopy, dormantBasal, paddy } = definition;
  const rows = (member: keyof Crop, listed: Rows): PartRow[] =>
    listed
      .filter(([, value]) => typeof value === 'number')
      .map(([term, value, unit]) => ({
        key: `${member} ${term}`,
        term,
        value: value as number,
        unit,
        source: crop.sources[member] ?? 'not stated',
      }));
  return [
    ...rows('single', [
      ['Single coefficient Kc, initial stage', single?.initial, ''],
      ['Single coefficient Kc, mid-season', single?.mid, ''],
      ['Single coefficient Kc, end of the season', single?.end, ''],
    ]),
    ...rows('stageResponse', [
      ['Yield response factor Ky, initial stage', stageResponse?.initial, ''],
      ['Yield response factor Ky, development', stageResponse?.development, ''],
      ['Yield response factor Ky, mid-season', stageResponse?.mid, ''],
      ['Yield response factor Ky, late stage', stageResponse?.late, ''],
    ]),
    ...rows('salinity', [
      ['Salt the crop bears without loss, ECe of the saturation extract', salinity?.threshold, 'dS/m'],
      ['Loss of yield for each dS/m above it', salinity?.slope, '%'],
    ]),
    ...rows('canopy', [
      ['Ground covered or shaded at noon, mid-season', canopy?.cover, ''],
      ['Height of the canopy', canopy?.height, 'm'],
    ]),
    ...rows('dormantBasal', [['Basal coefficient Kcb while dormant', dormantBasal, '']]),
    ...rows('paddy', [
      ['Flooded, from the planting', paddy?.floodFrom, 'd'],
      ['Drained before harvest', paddy?.drainBefore, 'd'],
      ['Depth of water an application fills to', paddy?.pondTarget, 'mm'],
      ['Depth of water at which it starts', paddy?.pondMinimum, 'mm'],
      ['Height of the bunds', paddy?.bund, 'mm'],
      ['Depth of the puddled soil', paddy?.puddledDepth, 'm'],
    ]),
  ];
}
