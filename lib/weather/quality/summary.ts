/** What a check keeps beside its flags, as it is stored: plain JSON, days as dates, null for missing. */
import { addDays } from '../../base/civil-date.ts';
import { nullFromNaN, roundOrNull } from '../../base/missing.ts';
import type { Site } from '../variable.ts';
import type { SiteMove, SitePlace } from './homogeneity.ts';
import type { NeighbourLine } from './neighbours.ts';

export interface PyranometerSummary {
  readonly site: string;
  /** upper quartile of all windows [1] */
  readonly level: number | null;
  readonly years: readonly { readonly year: number; readonly ratio: number; readonly windows: number }[];
  readonly windows: readonly { readonly from: string; readonly to: string; readonly ratio: number }[];
  /** % per year */
  readonly driftPct: number | null;
  readonly driftErrorPct: number | null;
  readonly drifting: boolean;
  readonly suggestedFactor: number | null;
}

export interface AriditySummary {
  readonly site: string;
  readonly from: string;
  readonly to: string;
  readonly months: number;
  /** °C */
  readonly ko: number;
  /** mean Tmin − Tdew [°C] */
  readonly difference: number;
  readonly index: number;
  /** mm of reference ET over the period */
  readonly before: number;
  readonly after: number;
}

export interface NeighbourSummary {
  readonly site: string;
  readonly neighbour: string;
  readonly variable: string;
  /** km */
  readonly distance: number;
  readonly rSquared: number;
  readonly slope: number;
  readonly intercept: number;
  readonly residualDeviation: number;
  readonly days: number;
  readonly acceptable: boolean;
}

/** Stored beside the flags of a source. */
export interface CheckSummary {
  /** false for grids, whose cells have no instruments */
  readonly checked: boolean;
  readonly from: string | null;
  readonly to: string | null;
  readonly sites: number;
  readonly pyranometers: readonly PyranometerSummary[];
  readonly aridity: readonly AriditySummary[];
  readonly neighbours: readonly NeighbourSummary[];
  readonly places: readonly SitePlace[];
  readonly moves: readonly SiteMove[];
}

interface PyranometerFigures {
  readonly site: number;
  readonly level: number;
  readonly years: PyranometerSummary['years'];
  readonly windows: readonly { readonly first: number; readonly last: number; readonly ratio: number }[];
  readonly slope: number;
  readonly slopeError: number;
  readonly suggestedFactor: number;
  readonly drifting: boolean;
}

interface OfferFigures extends Omit<AriditySummary, 'site' | 'from' | 'to'> {
  readonly site: number;
  readonly first: number;
  readonly last: number;
}

/** The figures of a check by the codes of the sites and by dates. */
export function summaryOf(
  record: { readonly sites: readonly Site[]; readonly startDate: string; readonly dayCount: number },
  found: {
    readonly pyranometers: readonly PyranometerFigures[];
    readonly aridity: readonly OfferFigures[];
    readonly lines: readonly NeighbourLine[];
    readonly places: readonly SitePlace[];
    readonly moves: readonly SiteMove[];
  },
): CheckSummary {
  const { sites, startDate, dayCount } = record;
  const code = (site: number) => sites[site].code;
  const date = (day: number) => addDays(startDate, day);
  return {
    checked: true,
    from: dayCount > 0 ? startDate : null,
    to: dayCount > 0 ? date(dayCount - 1) : null,
    sites: sites.length,
    pyranometers: found.pyranometers.map((each) => ({
      site: code(each.site),
      level: nullFromNaN(each.level),
      years: each.years,
      windows: each.windows.map(({ first, last, ratio }) => ({ from: date(first), to: date(last), ratio })),
      driftPct: nullFromNaN(each.slope * 100),
      driftErrorPct: nullFromNaN(each.slopeError * 100),
      drifting: each.drifting,
      suggestedFactor: nullFromNaN(each.suggestedFactor),
    })),
    aridity: found.aridity.map(({ site, first, last, ...figures }) => ({
      site: code(site),
      from: date(first),
      to: date(last),
      ...figures,
    })),
    neighbours: found.lines.map(({ site, neighbour, variable, distance, line, acceptable }) => ({
      site: code(site),
      neighbour: code(neighbour),
      variable,
      distance: roundOrNull(distance / 1000, 1) ?? 0,
      rSquared: line.rSquared,
      slope: line.slope,
      intercept: line.intercept,
      residualDeviation: line.residualDeviation,
      days: line.count,
      acceptable,
    })),
    places: found.places,
    moves: found.moves,
  };
}
