import { Go } from '../../_components/go.tsx';
import { Section } from '../../_components/page-head.tsx';

/** What a run takes from the district's records, and by which rule. */
export function RecordRules() {
  return (
    <Section
      id="records"
      title="Records of the district"
      note="What was recorded goes before what is assumed, where the settings of a run ask for it. Each run says what it rested on."
    >
      <dl className="pairs">
        <dt>Deliveries</dt>
        <dd>
          A volume at the edge of the field, gross; over the area of the parcel it is a depth, shared among the strips that carry a crop
          that day. Net = gross × efficiency. What the soil cannot hold percolates. The record ends with the last day of the season on which
          any parcel of the district has a delivery, be it of 0; from the next day on the rule of each planting asks for water.
        </dd>
        <dt>Soil water as measured</dt>
        <dd>
          The latest day within 14 days before the season that has any. Water contents: D = 1000 (θ<sub>FC</sub> − θ) Δz for each piece,
          through the layers of the soil, held between 0 and what it can hold (FAO-56 Eq. 87 by pieces). A depletion that names no depth is
          of the deepest root of the first planting. Below what was measured, and where nothing was, the share of the settings holds.
        </dd>
        <dt>Carried over</dt>
        <dd>
          What the standing run of the latest season before this one left in the soil, with the snow. Days between the two are stepped with
          the weather on record and without irrigation, but for recorded deliveries; crops that were not harvested stand on. At most 400
          days.
        </dd>
        <dt>Spun up</dt>
        <dd>
          Days before the season are stepped with their weather, with the plantings of the seasons before and irrigation by their rules, and
          nothing of them is kept. They reach back while any site of the source has weather.
        </dd>
        <dt>Salt</dt>
        <dd>
          The latest ECe and ECw measured on the first day of the season or before. Water that was not measured has the conductivity of the
          settings; soil that was not measured has EC<sub>e</sub> = (1 + LF) / LF · EC<sub>w</sub> / 5 with LF = 0.15 (FAO-56 Eq. 93;
          leaching fraction after FAO-29, recalled, not re-read).
        </dd>
        <dt>Water table, efficiency</dt>
        <dd>
          Depths of the water table from a year before the run to its end: straight lines between them, the end values beyond. An efficiency
          of a parcel is the latest up to the end of the season, and goes before that of <Go href="/settings#methods">its method</Go>.
        </dd>
      </dl>
      <p className="source">The limits of 14 days, 400 days and a year are the product’s own.</p>
    </Section>
  );
}
