import { depthToVolume, type UnitSystem, volumeToFlow } from '../../lib/base/units.ts';
import type { ParcelDay, ParcelSeason } from '../../lib/http/contract/run.ts';
import { isAhead } from '../../lib/weather/day-kind.ts';
import { dayKindWord } from './ahead-shade.tsx';
import { dayMonth } from './date-words.ts';
import { figure, type Maybe, percent, plain, sumOf, unitOf } from './figures.ts';
import { Go } from './go.tsx';
import styles from './water-chain.module.css';

type Water = 'rain' | 'et' | 'soil' | 'irrigation';

interface Link {
  readonly name: string;
  readonly note: string;
  readonly water: Water;
  /** part of the working that derives it */
  readonly part: string;
  readonly unit: string;
  readonly value: (days: readonly ParcelDay[]) => string;
}

export interface ChainSpan {
  readonly name: string;
  readonly days: readonly ParcelDay[];
}

/** From weather to turnout demand, link by link, over several spans side by side. Every number leads to the working of the day picked. */
export function WaterChain({ season, spans, date, units, workingHref }: WaterChainProps) {
  const links = linksOf(season, units);
  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls must be reachable from the keyboard
    <section className="table-region" tabIndex={0} aria-label="The water chain of this parcel">
      <table className={`data ${styles.chain}`}>
        <caption>Each number opens the working of {dayMonth(date)}, at the part that derives it.</caption>
        <thead>
          <tr>
            <th scope="col">Link of the chain</th>
            {spans.map((span) => (
              <th scope="col" key={span.name} className="num">
                {span.name}
                {aheadCount(span.days) > 0 ? (
                  <span className="chain-note">
                    {span.days.length === 1
                      ? dayKindWord(span.days[0].day_kind)
                      : `${aheadCount(span.days)} of ${span.days.length} days not observed`}
                  </span>
                ) : null}
              </th>
            ))}
            <th scope="col">Unit</th>
          </tr>
        </thead>
        <tbody>
          {links.map((link) => (
            <tr key={link.name}>
              <th scope="row" data-water={link.water}>
                <span className="chain-name">{link.name}</span>
                <span className="chain-note">{link.note}</span>
              </th>
              {spans.map((span) => (
                <td key={span.name} className="num">
                  <Go href={`${workingHref}#${link.part}`}>{link.value(span.days)}</Go>
                </td>
              ))}
              <td className="unit">{link.unit}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}

interface WaterChainProps {
  readonly season: ParcelSeason;
  readonly spans: readonly ChainSpan[];
  readonly date: string;
  readonly units: UnitSystem;
  /** address of the working of `date` */
  readonly workingHref: string;
}

function linksOf(season: ParcelSeason, units: UnitSystem): readonly Link[] {
  const area = season.area_ha * 1e4;
  const depth = (pick: (day: ParcelDay) => Maybe) => (days: readonly ParcelDay[]) => figure(sumOf(days, pick), 'depth', units);
  const volume = (days: readonly ParcelDay[]) =>
    depthToVolume(
      sumOf(days, (day) => day.gross_requirement_mm),
      area,
    );
  const mm = unitOf('depth', units);
  const rises = season.days.some((day) => (day.capillary_rise_mm ?? 0) > 0);
  const loses = season.days.some((day) => (day.irrigation_percolation_mm ?? 0) > 0);
  const link = (name: string, note: string, water: Water, pick: (day: ParcelDay) => Maybe): Link => {
    return { name, note, water, part: 'balance', unit: mm, value: depth(pick) };
  };
  return [
    {
      name: 'Reference ET',
      note: 'weather → energy balance → a grass surface',
      water: 'et',
      part: 'reference-et',
      unit: mm,
      value: depth((day) => day.reference_et_mm),
    },
    {
      name: 'Crop ET',
      note: '× crop coefficients, no stress',
      water: 'et',
      part: 'coefficient',
      unit: mm,
      value: depth((day) => day.crop_et_mm),
    },
    {
      name: 'Crop ET, adjusted',
      note: '× stress coefficient: what the crop takes',
      water: 'et',
      part: 'root-zone',
      unit: mm,
      value: depth((day) => day.adjusted_crop_et_mm),
    },
    {
      name: 'Rain',
      note: 'of the sites by their weights, as measured or told ahead',
      water: 'rain',
      part: 'weather',
      unit: mm,
      value: depth((day) => day.precipitation_mm),
    },
    {
      name: 'Effective rain',
      note: 'rain − runoff − percolation past the roots: stays for the crop',
      water: 'rain',
      part: 'root-zone',
      unit: mm,
      value: depth((day) => day.effective_precipitation_mm),
    },
    ...(rises ? [link('Capillary rise', 'from the water table', 'soil', (day) => day.capillary_rise_mm)] : []),
    ...(loses
      ? [
          link(
            'Irrigation lost below the roots',
            'leaching, seepage, more than the soil takes',
            'irrigation',
            (day) => day.irrigation_percolation_mm,
          ),
        ]
      : []),
    {
      name: 'Drawn from the soil',
      note: 'crop ET, adjusted − effective rain − capillary rise − net requirement + what of it is lost; below 0: refilled',
      water: 'soil',
      part: 'balance',
      unit: mm,
      value: (days) => figure(soilDrawn(days), 'depth', units),
    },
    {
      name: 'Net requirement',
      note: 'water that must reach the root zone',
      water: 'irrigation',
      part: 'irrigation',
      unit: mm,
      value: depth((day) => day.net_requirement_mm),
    },
    {
      name: '÷ Application efficiency',
      note: `${season.method.name}`,
      water: 'irrigation',
      part: 'irrigation',
      unit: '1',
      value: () => percent(season.method.efficiency),
    },
    {
      name: 'Gross requirement',
      note: 'net ÷ efficiency',
      water: 'irrigation',
      part: 'irrigation',
      unit: mm,
      value: depth((day) => day.gross_requirement_mm),
    },
    {
      name: 'Turnout demand',
      note: 'gross depth × area',
      water: 'irrigation',
      part: 'irrigation',
      unit: unitOf('volume', units),
      value: (days) => figure(volume(days), 'volume', units),
    },
    {
      name: 'As a steady flow',
      note: 'the volume spread over all hours of the days',
      water: 'irrigation',
      part: 'irrigation',
      unit: flowUnit(units),
      value: (days) => steadyFlow(volumeToFlow(volume(days), days.length), units),
    },
  ];
}

/** Days past the last observation. */
function aheadCount(days: readonly ParcelDay[]): number {
  return days.filter(({ day_kind }) => isAhead(day_kind)).length;
}

function flowUnit(units: UnitSystem): string {
  return units === 'us' ? unitOf('flow', units) : 'L/s';
}

function steadyFlow(flow: number, units: UnitSystem): string {
  return units === 'us' ? figure(flow, 'flow', units) : plain(flow * 1000, 2);
}

/** What the soil gave over a span: by the water balance, what the crop took beyond rain and irrigation [mm]. */
function soilDrawn(days: readonly ParcelDay[]): number {
  const given = (value: number | null) => value ?? Number.NaN;
  return days.reduce(
    (sum, day) =>
      sum +
      given(day.adjusted_crop_et_mm) -
      given(day.effective_precipitation_mm) -
      (day.capillary_rise_mm ?? 0) -
      (given(day.net_requirement_mm) - (day.irrigation_percolation_mm ?? 0)),
    0,
  );
}
