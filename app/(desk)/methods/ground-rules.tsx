import { mostCapillaryRise, TEXTURE_CLASSES, textureProperties } from '../../../lib/crop/capillary-rise.ts';
import { FROZEN_FROM, THAWED_BELOW } from '../../../lib/crop/frozen-ground.ts';
import { FIVE_DAY_LIMITS } from '../../../lib/crop/runoff.ts';
import { ALL_RAIN_AT, ALL_SNOW_AT, MELT_COEFFICIENT } from '../../../lib/crop/snow.ts';
import { DataTable } from '../../_components/data-table.tsx';
import { Section } from '../../_components/page-head.tsx';

/** Heights over the water table that the table of rise shows [m]. */
const HEIGHTS = [0.5, 1, 1.5, 2, 3];

/** Snow, frost, runoff, layers, carry-over, salt and rise, with what each leaves out. */
export function GroundRules() {
  return (
    <Section
      id="ground"
      title="Snow, runoff, soil layers, salt and water tables"
      note="Each of these is a setting of the run. Left off, rain of the day reaches the ground that day and the soil is not salty."
    >
      <ul>
        <li>
          Snow: all of the precipitation at a mean of {ALL_SNOW_AT} °C or less, none from {ALL_RAIN_AT} °C, in proportion between (US Army
          Corps of Engineers 1956, recalled). It melts at {MELT_COEFFICIENT.toFixed(2)} mm per °C above 0 and day (NEH 630 chapter 11,
          recalled; 1.6 to 6.0 is usual). Sublimation, drift and shade are left out. While snow lies, crop and soil take no water.
        </li>
        <li>
          Frozen ground: the index CFGI grows with cold and shrinks by 3 % a day and with warmth, less under snow; from {FROZEN_FROM} °C d
          on the ground is frozen until it falls below {THAWED_BELOW} (Molnau &amp; Bissell 1983, recalled). Frozen ground takes up nothing:
          rain and melt run off. The index begins at 0; a run that starts in winter needs days in front.
        </li>
        <li>
          Antecedent moisture: the curve number of the soil as it is; or dry below {FIVE_DAY_LIMITS.growing.dry} mm and wet above{' '}
          {FIVE_DAY_LIMITS.growing.wet} mm of rain and melt in the five days before ({FIVE_DAY_LIMITS.dormant.dry} and{' '}
          {FIVE_DAY_LIMITS.dormant.wet} mm where their mean temperature is below 5 °C); or between the two by how dry the surface layer is
          (NEH and ASCE Manual 70, recalled). The curve number is made for storms on catchments: the runoff of a single field is an
          estimate.
        </li>
        <li>
          Layers: available water is added up through the layers of a soil; under a parcel on several soils the layers are mixed by depth
          and area. Roots that grow take over depletion in proportion to the water their new soil holds.
        </li>
        <li>
          Carry-over: soil water is handed from season to season as one profile per parcel, its strips weighted by area. Soil below the
          deepest root of a strip is as the season found it, refilled from above by what percolated past the roots, down to 3 m; water above
          field capacity has drained.
        </li>
        <li>
          Salt: stress by FAO-56 Eq. 91, which holds while yield falls by less than half; leaching requirement ECw / (5 ECe − ECw) with the
          ECe of the crop’s threshold (FAO-29). A laboratory’s advice on soil and water goes before both.
        </li>
        <li>
          Water tables: the most that rises steadily from the table to the lower edge of the roots, never more than the soil is short of.
          The table below shows it for textures; one soil can differ from its class several times over, so measured properties are better.
        </li>
      </ul>
      <DataTable
        caption="Most that rises from a water table [mm per day], by height of the roots above it; hydraulic properties of Rawls, Brakensiek & Saxton 1982 (recalled)"
        showCaption
        rows={TEXTURE_CLASSES.map((texture) => ({ texture, soil: textureProperties(texture) }))}
        rowKey={({ texture }) => texture}
        columns={[
          { key: 'texture', head: 'Texture', rowHead: true, cell: ({ texture }) => texture.replaceAll('-', ' ') },
          ...HEIGHTS.map((height) => ({
            key: `h${height}`,
            head: `${height} m`,
            numeric: true,
            cell: ({ soil }: { soil: ReturnType<typeof textureProperties> }) => mostCapillaryRise(soil, height).toFixed(1),
          })),
        ]}
      />
    </Section>
  );
}
