/**
 * What the PDF writer takes: blocks of a document as plain values, already worded and in the reader's units.
 */
export interface PdfDocument {
  readonly title: string;
  readonly subtitle: string;
  /** stands on every page, or null */
  readonly notice: string | null;
  readonly paper: 'a4' | 'letter';
  /** BCP 47 */
  readonly language: string;
  /** YYYY-MM-DD */
  readonly made: string;
  readonly run: string;
  readonly blocks: readonly PdfBlock[];
}

export type PdfBlock =
  | { readonly kind: 'figures'; readonly items: readonly { readonly label: string; readonly value: string }[] }
  | { readonly kind: 'map'; readonly heading: string; readonly note: string; readonly map: PdfMap }
  | { readonly kind: 'bars'; readonly heading: string; readonly chart: PdfBars }
  | { readonly kind: 'table'; readonly table: PdfTable }
  | { readonly kind: 'text'; readonly heading: string; readonly paragraphs: readonly string[] };

export interface PdfTable {
  readonly title: string;
  readonly columns: readonly { readonly header: string; readonly kind: 'text' | 'number' }[];
  readonly rows: readonly (readonly string[])[];
  readonly total: readonly string[] | null;
}

type Point = readonly [number, number];

export interface PdfLegendEntry {
  readonly label: string;
  readonly colour: string;
  /** index into `hatches`, −1 for none */
  readonly pattern: number;
  readonly areaLabel: string;
  readonly areaShare: number;
}

export interface PdfMap {
  readonly width: number;
  readonly height: number;
  readonly metresPerUnit: number;
  readonly parcels: readonly { readonly rings: readonly (readonly Point[])[]; readonly classIndex: number }[];
  readonly canals: readonly { readonly points: readonly Point[]; readonly width: number; readonly colour: string }[];
  readonly legend: {
    readonly title: string;
    readonly unit: string;
    readonly entries: readonly PdfLegendEntry[];
    readonly missing: PdfLegendEntry | null;
  };
  readonly canalLegend: readonly { readonly label: string; readonly colour: string; readonly width: number }[];
  /** hatchings by pattern: lines at an angle [degrees] so far apart [points] */
  readonly hatches: readonly (readonly { readonly angle: number; readonly spacing: number }[])[];
  /** text alternative */
  readonly alt: string;
  /** for the scale bar */
  readonly units: 'metric' | 'us';
}

export interface PdfBars {
  readonly width: number;
  readonly height: number;
  readonly plot: { readonly x: number; readonly y: number; readonly width: number; readonly height: number };
  readonly bars: readonly {
    readonly x: number;
    readonly y: number;
    readonly width: number;
    readonly height: number;
    readonly forecast: boolean;
  }[];
  readonly xTicks: readonly { readonly at: number; readonly label: string }[];
  readonly yTicks: readonly { readonly at: number; readonly label: string }[];
  readonly yTitle: string;
  readonly description: string;
}
