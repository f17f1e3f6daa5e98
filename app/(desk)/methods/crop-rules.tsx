import { MATURE_COVER } from '../../../lib/crop/canopy.ts';
import { SOIL_TEMPERATURE_DAYS } from '../../../lib/crop/soil-temperature.ts';
import { TAIL_DAYS } from '../../../lib/crop/thermal-time.ts';
import { WEED_COVER, WEED_HEIGHT, weedBasal } from '../../../lib/crop/weeds.ts';
import { percent, plain } from '../../_components/figures.ts';
import { Section } from '../../_components/page-head.tsx';

/** Calendars and coefficients: what decides them, and what they leave out. */
export function CropRules() {
  return (
    <Section
      id="crop-calendars"
      title="Calendars and crop coefficients"
      note="A planting takes the calendar it names. What follows the weather is decided for each parcel by its own weather."
    >
      <ul>
        <li>
          Thermal time: degree days by both extremes of the day, each held between base and upper temperature (McMaster &amp; Wilhelm 1997,
          method 2, recalled). Days before the run go by the calendar’s days; past its end the mean of its last {TAIL_DAYS} days goes on.
        </li>
        <li>
          Starts by weather: winter wheat at 17 °C or on 1 December, spring wheat at 5 °C, maize at 13 °C, alfalfa from the last to the
          first −4 °C, pasture seven days around it (FAO-56 chapter 6). Soil temperature is the mean of the air’s over{' '}
          {SOIL_TEMPERATURE_DAYS} days (common practice, no source). A rule that is not met starts the crop on its latest day.
        </li>
        <li>
          Coefficients of mid and late season are adjusted to the wind and least humidity of those days of the stage that lie in the run,
          observed, forecast or normal (FAO-56 Eq. 62, 65, 70). A stage with no day in the run keeps the table’s value. Each cutting cycle
          is adjusted by itself.
        </li>
        <li>
          Tables on tall (alfalfa) reference ET are not adjusted: the ratio of the day brings them to short reference ET (FAO-56 Eq. 68).
        </li>
        <li>
          Canopies: Kcb mid from cover and height (FAO-56 Eq. 98 to 100, recalled). Where no stomatal factor is known it is fitted so that{' '}
          {percent(MATURE_COVER)} of cover gives the table’s value; initial and late values keep the table’s proportion.
        </li>
        <li>
          Single coefficients: Kc ini of annual crops from how often the soil is wetted (FAO-56 Annex 7); irrigation by depletion is counted
          as the rule is expected to give it, before the run steps it. Ponded rice: FAO-56 Table 14. Bare ground between crops: the same
          charts, by its rain in blocks of 30 days.
        </li>
        <li>
          Mulch: plastic leaves evaporation to the open ground; organic keeps back 5 % for each 10 % covered; a single coefficient falls by
          30 % under plastic that covers all (FAO-56 chapter 10, recalled).
        </li>
        <li>
          Observed cover: linear between images; before the first and after the last the calendar’s curve, moved by the difference, which
          fades to nothing at planting and harvest. NDVI to cover by Johnson &amp; Trout (2012), cover to Kcb by Allen &amp; Pereira (2009),
          both recalled.
        </li>
        <li>
          Between crops the ground is bare, or carries weeds on {percent(WEED_COVER)} of it, {plain(WEED_HEIGHT, 1)} m high: Kcb{' '}
          {plain(weedBasal(), 2)} (their cover is common practice, no source). Standing crops outside their season have the dormant Kcb of
          the library.
        </li>
        <li>
          Texture: p is 10 % higher on coarse and 10 % lower on fine soils where the soil says which it is (FAO-56, text of Table 22).
        </li>
      </ul>
    </Section>
  );
}
