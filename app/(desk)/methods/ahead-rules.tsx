import { NORMAL_HALF_WINDOW, NORMAL_WINDOW } from '../../../lib/weather/normal-of-day.ts';
import { Section } from '../../_components/page-head.tsx';

/** What stands on days past the last observation. */
export function AheadRules() {
  return (
    <Section
      id="ahead"
      title="Days past the last observation"
      note="From the day after the last on which any site of the run has air temperature (or reference ET of its own). A site that stops earlier has a gap."
    >
      <ol>
        <li>
          The forecast, where the district has one and it has the day: of the nearest forecast site, its temperatures moved to the site’s
          elevation by the lapse rate. A mean error of the forecast is not taken off: past issues are overwritten day by day, so nothing
          tells how far they were out.
        </li>
        <li>
          Then the normal of the day: for temperature, vapour pressure, solar radiation, wind (and reference ET where it is carried from the
          sites), the mean over a window of {NORMAL_WINDOW} days, {NORMAL_HALF_WINDOW} on either side, in every other year on record (means
          after WMO-No. 1203; the window is this product’s own). 29 February is taken as 1 March in common years. Values that were estimated
          count only at a site that never measured them.
        </li>
        <li>
          Rain on these days is that of one stored year as it fell: the year whose rain over the same days lies nearest to the median of the
          years with at least 80 % of them on record. The mean rain of the day would drizzle daily, keep the surface wet, and never run off
          or percolate.
        </li>
        <li>
          Or the days of an analogue year, named by the year in which its season ended. 29 February takes the weather of 28 February,
          without its rain, in a common year.
        </li>
        <li>
          A season of which nothing has been observed needs at least two years on record. Days to come end 1,096 days after the last
          observation. They count as estimated, are hatched, and enter no normal, check, gap filling or variogram.
        </li>
      </ol>
      <p>
        Reference ET of the mean weather is not exactly the mean of the reference ET, since the equation is not linear: 0.7 to 1.0 % less
        over five summers at Mead, Nebraska. Have reference ET computed at the sites to be without it. The spread of the years is left out:
        told by normals, those summers were out by −8 to +21 %, the last for a cool one. See the validation page.
      </p>
    </Section>
  );
}
